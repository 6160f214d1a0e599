/** Letters of Alpha-5 in order of value, 10 to 33; I and O are left out because they look like digits. */
const LETTERS = 'ABCDEFGHJKLMNPQRSTUVWXYZ'

/**
 * A TLE's five-column catalogue number spelled out: "00005" is "5", "A0000" is "100000", "Z9999" is "339999".
 * Leading blanks stand for zeros. Source: the published Alpha-5 scheme (A = 10 … Z = 33, without I and O).
 * @returns null when the text is no catalogue number
 */
export function spellOutCatalogueNumber(columns: string): string | null {
  const text = columns.trimStart()
  const head = text[0]
  if (head === undefined) return null
  const tail = text.slice(1)
  for (let i = 0; i < tail.length; i++) if (tail[i]! < '0' || tail[i]! > '9') return null
  if (head >= '0' && head <= '9') return String(Number(text))
  const value = LETTERS.indexOf(head.toUpperCase())
  if (value < 0 || tail.length !== 4) return null
  return `${value + 10}${tail}`
}
