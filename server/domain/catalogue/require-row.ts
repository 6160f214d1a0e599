import { DomainError } from '../errors'

/** The row that an address names, or 404. */
export function requireFound<T>(row: T | undefined, noun: string): T {
  if (!row) throw new DomainError('not-found', `There is no ${noun} under this address.`)
  return row
}

/** The row to change: there, and not retired. */
export function requireLive<T extends { retiredAt: Date | null }>(row: T | undefined, noun: string): T {
  const found = requireFound(row, noun)
  if (found.retiredAt) throw new DomainError('conflict', `This ${noun} has been retired; it is kept for the record and no longer changes.`)
  return found
}

/** The row that a field of the body refers to: there, and not retired. */
export function requireReferred<T extends { retiredAt: Date | null }>(row: T | undefined, path: string, noun: string): T {
  if (!row || row.retiredAt) {
    const message = row ? `This ${noun} has been retired: choose another.` : `There is no such ${noun}.`
    throw new DomainError('not-valid', `${path}: ${message}`, [{ path, message }])
  }
  return row
}

/** Rules between fields, run on the row as it would stand. */
export function requireNoProblems(problems: readonly { path: string, message: string }[]): void {
  if (problems.length === 0) return
  throw new DomainError('not-valid', problems.length === 1 ? `${problems[0]!.path}: ${problems[0]!.message}` : `${problems.length} fields need mending.`, problems)
}
