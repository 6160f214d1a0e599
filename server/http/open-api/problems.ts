import type { ErrorCode } from '~~/server/domain/errors'
import { errorStatus, errorTitles } from '~~/server/domain/errors'

/** RFC 9457, with the fields that need mending. */
export const problemSchema = {
  type: 'object',
  required: ['type', 'title', 'status', 'detail'],
  properties: {
    type: { type: 'string', format: 'uri-reference' },
    title: { type: 'string' },
    status: { type: 'integer', minimum: 400, maximum: 599 },
    detail: { type: 'string' },
    errors: { type: 'array', items: { type: 'object', required: ['path', 'message'], properties: { path: { type: 'string' }, message: { type: 'string' }, line: { type: 'integer' } } } },
  },
}

const responseName = (code: ErrorCode) => code.split('-').map(word => word.charAt(0).toUpperCase() + word.slice(1)).join('')
const described = (description: string, headers?: object) => ({ description, ...(headers ? { headers } : {}), content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } } })
const retryAfter = { 'Retry-After': { description: 'Seconds to wait', schema: { type: 'integer', minimum: 1 } } }

export const errorResponses = Object.fromEntries((Object.keys(errorStatus) as ErrorCode[])
  .map(code => [responseName(code), described(errorTitles[code], code === 'too-many' || code === 'unavailable' ? retryAfter : undefined)]))

/** References to the responses of these errors, by status. */
export function problemResponses(codes: readonly ErrorCode[]): Record<string, { $ref: string }> {
  return Object.fromEntries(codes.map(code => [String(errorStatus[code]), { $ref: `#/components/responses/${responseName(code)}` }]))
}
