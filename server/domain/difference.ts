import { isDeepStrictEqual } from 'node:util'

/** What a change would really change, before and after; null when all stands so already. Fields left out are not touched. */
export function difference<T extends object>(present: T, change: Partial<T>): { before: Partial<T>, after: Partial<T> } | null {
  const before: Partial<T> = {}
  const after: Partial<T> = {}
  for (const field of Object.keys(change) as (keyof T)[]) {
    if (change[field] === undefined || isDeepStrictEqual(present[field], change[field])) continue
    before[field] = present[field]
    after[field] = change[field]
  }
  return Object.keys(after).length > 0 ? { before, after } : null
}

/** Whether a change touches one of these fields. */
export function touches<T extends object>(change: { after: Partial<T> }, fields: readonly (keyof T)[]): boolean {
  return fields.some(field => Object.hasOwn(change.after, field))
}
