const isBlank = (code: number) => code === 0x20 || code === 0x09 || code === 0xA0 || code === 0x2009 || code === 0x202F
const isDigit = (code: number) => code >= 0x30 && code <= 0x39
const isLetter = (code: number) => (code >= 0x41 && code <= 0x5A) || (code >= 0x61 && code <= 0x7A)

/** As far as a line need be read to know what it is. */
const READ_AT_MOST = 160
const CATALOGUE_TOKEN = /^[0-9A-Za-z][0-9]{4}[A-Za-z]?$/

/** Short token of numbers and marks, as the columns of a data line hold: no word of three letters. */
function isColumnToken(token: string): boolean {
  let digits = 0
  let lettersInRow = 0
  for (let i = 0; i < token.length; i++) {
    const code = token.charCodeAt(i)
    if (isDigit(code)) digits++
    lettersInRow = isLetter(code) ? lettersInRow + 1 : 0
    if (lettersInRow > 3) return false
  }
  return digits > 0
}

/**
 * Which data line of a TLE this is, whole or damaged, or null for anything else. Known by its columns and not by
 * its first character alone, because a name may begin with "1 " or "2 ": a data line is mostly digits, or its second
 * word is a catalogue number and the rest is numbers.
 */
export function whichDataLine(text: string): 1 | 2 | null {
  let at = 0
  while (isBlank(text.charCodeAt(at))) at++
  const which = text[at] === '1' ? 1 : text[at] === '2' ? 2 : null
  if (which === null || !isBlank(text.charCodeAt(at + 1))) return null
  const head = text.slice(at, at + READ_AT_MOST)
  let digits = 0
  let letters = 0
  for (let i = 0; i < head.length; i++) {
    if (isDigit(head.charCodeAt(i))) digits++
    else if (isLetter(head.charCodeAt(i))) letters++
  }
  if (digits >= 20 && letters * 2 <= digits) return which
  const tokens = head.split(/\s/).filter(token => token !== '')
  if (tokens.length < 2 || !CATALOGUE_TOKEN.test(tokens[1]!)) return null
  return tokens.slice(2).every(isColumnToken) ? which : null
}

/** A first line in the published columns, beyond doubt: blanks and points where they belong. */
export function isWholeLine1(text: string): boolean {
  if (text.length < 68 || text[0] !== '1' || text[23] !== '.' || text[34] !== '.') return false
  return [2, 9, 18, 33, 44, 53, 62, 64].every(column => text[column - 1] === ' ') && whichDataLine(text) === 1
}
