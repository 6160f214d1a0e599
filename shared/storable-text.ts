const DEEPEST = 32

/** PostgreSQL's text holds neither NUL nor half a surrogate pair. */
const isStorable = (text: string): boolean => !text.includes('\u0000') && text.isWellFormed()

interface Unstorable { path: string, message: string }

/** Where in a request's JSON or query a text stands that cannot be kept, or where it is nested beyond all use; null when all is well. */
export function findUnstorable(value: unknown, path: readonly string[] = []): Unstorable | null {
  if (typeof value === 'string') return isStorable(value) ? null : { path: path.join('.'), message: 'Holds a NUL character or half of a surrogate pair: take it out.' }
  if (typeof value !== 'object' || value === null) return null
  if (path.length >= DEEPEST) return { path: path.slice(0, 3).join('.'), message: `Nested more than ${DEEPEST} levels deep.` }
  for (const [key, inner] of Object.entries(value)) {
    const found = findUnstorable(inner, [...path, key])
    if (found) return found
  }
  return null
}
