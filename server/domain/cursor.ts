import { z } from 'zod'
import { findUnstorable } from '#shared/storable-text'
import { DomainError } from './errors'

/** An instant in a cursor, as `toISOString` writes it and the database reads it. */
export const cursorInstant = z.iso.datetime({ precision: 3 }).regex(/^[1-9]/)

/** The key of a page's last row, opaque to the caller. */
function writeCursor(key: readonly (string | number | null)[]): string {
  return Buffer.from(JSON.stringify(key)).toString('base64url')
}

/** The key that a cursor holds, checked against the list's own form; null for the first page. Anything else is not valid. */
export function readCursor<T extends z.ZodType>(cursor: string | undefined, form: T): z.output<T> | null {
  if (cursor === undefined) return null
  try {
    const result = form.safeParse(JSON.parse(Buffer.from(cursor, 'base64url').toString('utf8')))
    if (result.success && !findUnstorable(result.data)) return result.data
  }
  catch { /* not JSON */ }
  throw new DomainError('not-valid', 'cursor: take it from nextCursor of the page before, unchanged.', [{ path: 'cursor', message: 'Take it from nextCursor of the page before, unchanged.' }])
}

/** Cuts one row more than was asked for down to a page; that row shows that there is a next one. */
export function toPage<Row>(rows: readonly Row[], limit: number, keyOf: (row: Row) => readonly (string | number | null)[]): { rows: Row[], nextCursor: string | null } {
  const kept = rows.slice(0, limit)
  return { rows: kept, nextCursor: rows.length > limit ? writeCursor(keyOf(kept.at(-1)!)) : null }
}
