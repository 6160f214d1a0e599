/** The one error that domain functions throw; an exhaustive table gives each code its HTTP status. */
export const errorStatus = {
  'unreadable': 400,
  'not-signed-in': 401,
  'not-allowed': 403,
  'not-found': 404,
  'not-acceptable': 406,
  'conflict': 409,
  'gone': 410,
  'too-large': 413,
  'wrong-type': 415,
  'not-valid': 422,
  'too-many': 429,
  'unavailable': 503,
} as const
export type ErrorCode = keyof typeof errorStatus

export const errorTitles: Record<ErrorCode, string> = {
  'unreadable': 'The request cannot be read',
  'not-signed-in': 'Not signed in',
  'not-allowed': 'Not allowed',
  'not-found': 'No such thing',
  'not-acceptable': 'No notation that is asked for',
  'conflict': 'In conflict with the present state',
  'gone': 'Withdrawn',
  'too-large': 'Too large',
  'wrong-type': 'Wrong content type',
  'not-valid': 'Not valid',
  'too-many': 'Too many requests',
  'unavailable': 'Not available at the moment',
}

export interface FieldError { path: string, message: string, line?: number }

export class DomainError extends Error {
  constructor(readonly code: ErrorCode, detail: string, readonly fields: readonly FieldError[] = [], readonly retryAfterS?: number) {
    super(detail)
    this.name = 'DomainError'
  }
}

/** A database out of reach, or two transactions in each other's way, answers 503, and nothing else does: trying again helps. */
export function isUnavailable(error: unknown): boolean {
  for (let cause = error; cause instanceof Error; cause = cause.cause) {
    const code = (cause as { code?: unknown }).code
    if (typeof code === 'string' && (/^(08|57P0|53|40)/.test(code) || code === '57014' || code === 'ECONNREFUSED' || code === 'ECONNRESET' || code === 'EPIPE' || code === 'ETIMEDOUT')) return true
    if (/timeout exceeded when trying to connect|Connection terminated|Query read timeout|connection error and is not queryable|Client was closed and is not queryable/i.test(cause.message)) return true
  }
  return false
}

/** A value that PostgreSQL cannot read or hold (SQLSTATE class 22): what came in should have been refused before. */
export function isDataException(error: unknown): boolean {
  for (let cause = error; cause instanceof Error; cause = cause.cause) {
    const { code } = cause as { code?: unknown }
    if (typeof code === 'string' && /^22\w{3}$/.test(code)) return true
  }
  return false
}

/** Name of the unique rule or check that PostgreSQL saw broken. */
export function brokenConstraint(error: unknown): { kind: 'unique' | 'foreign-key' | 'check', name: string } | null {
  const kinds = { 23505: 'unique', 23503: 'foreign-key', 23514: 'check' } as const
  for (let cause = error; cause instanceof Error; cause = cause.cause) {
    const { code, constraint } = cause as { code?: unknown, constraint?: unknown }
    if (typeof code === 'string' && code in kinds) return { kind: kinds[code as unknown as keyof typeof kinds], name: typeof constraint === 'string' ? constraint : '' }
  }
  return null
}
