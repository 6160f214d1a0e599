import type { H3Event } from 'h3'
import { setResponseHeader, setResponseStatus } from 'h3'
import type { ErrorCode, FieldError } from '~~/server/domain/errors'
import { DomainError, brokenConstraint, errorStatus, errorTitles, isDataException, isUnavailable } from '~~/server/domain/errors'
import { describeError } from './describe-error'
import { log } from './log'

/** RFC 9457 problem details. No stack, query or path of the server ever appears in it. */
export interface Problem { type: string, title: string, status: number, detail: string, errors?: readonly FieldError[] }

export function problemOf(code: ErrorCode, detail: string, errors: readonly FieldError[] = []): Problem {
  return { type: `/problems/${code}`, title: errorTitles[code], status: errorStatus[code], detail, ...(errors.length > 0 ? { errors } : {}) }
}

export function answerProblem(event: H3Event, error: unknown): Problem {
  const known = asDomainError(error)
  if (!known || isDataException(error)) log.error({ requestId: event.context.requestId, error: describeError(error) }, 'request failed')
  const problem: Problem = known
    ? problemOf(known.code, known.message, known.fields)
    : { type: '/problems/internal', title: 'Something went wrong in the product', status: 500, detail: `The fault is recorded under ${String(event.context.requestId)}; nothing was changed.` }
  setResponseStatus(event, problem.status)
  setResponseHeader(event, 'content-type', 'application/problem+json')
  setResponseHeader(event, 'cache-control', 'no-store')
  if (known?.retryAfterS) setResponseHeader(event, 'retry-after', Math.ceil(known.retryAfterS))
  if (problem.status === 401) setResponseHeader(event, 'www-authenticate', 'Bearer')
  return problem
}

function asDomainError(error: unknown): DomainError | null {
  if (error instanceof DomainError) return error
  const broken = brokenConstraint(error)
  if (broken) return new DomainError('conflict', broken.kind === 'unique' ? 'Something with this name or number exists already: choose another.' : 'This does not fit what is stored now: reload and try again.')
  if (isUnavailable(error)) return new DomainError('unavailable', 'The database is out of reach or busy: try again in a few seconds.', [], 5)
  if (isDataException(error)) return new DomainError('not-valid', 'A value cannot be kept as it is: check texts, numbers and instants.')
  return null
}
