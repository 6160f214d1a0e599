import type { Notation } from './notation'

/** Digest plus notation: the same bytes, the same tag. */
export const entityTag = (digest: string, notation: Notation) => `"${digest}-${notation}"`

/**
 * How an If-None-Match header (RFC 9110, section 13.1.2, compared weakly) stands to a tag: `same` is proof that the
 * caller has it, `any` (`*`) is not.
 */
export function matchTag(header: string | undefined, tag: string): 'same' | 'any' | 'none' {
  if (header === undefined) return 'none'
  if (header.trim() === '*') return 'any'
  return [...header.matchAll(/"[^"]*"/g)].some(([held]) => held === tag) ? 'same' : 'none'
}
