import type { Line } from '../lines'
import type { Warn } from '../reading'
import { SetRefusal } from '../reading'
import { describeCharacter, quote } from '../show-value'
import { tleChecksum } from './checksum'

/** First and last column, 1-based, as published. */
export interface Columns { readonly label: string, readonly from: number, readonly to: number }

const columns = (label: string, from: number, to: number): Columns => ({ label, from, to })

/** Columns of the published two-line format. */
export const LINE_1 = {
  catalogueNumber: columns('Catalogue number', 3, 7),
  classification: columns('Classification', 8, 8),
  designator: columns('International designator', 10, 17),
  epochYear: columns('Epoch year', 19, 20),
  epochDay: columns('Epoch day', 21, 32),
  meanMotionDot: columns('First derivative of mean motion', 34, 43),
  meanMotionDdot: columns('Second derivative of mean motion', 45, 52),
  bstar: columns('B*', 54, 61),
  ephemerisType: columns('Ephemeris type', 63, 63),
  elementSetNumber: columns('Element set number', 65, 68),
} as const

export const LINE_2 = {
  catalogueNumber: columns('Catalogue number', 3, 7),
  inclination: columns('Inclination', 9, 16),
  raan: columns('Right ascension of the ascending node', 18, 25),
  eccentricity: columns('Eccentricity', 27, 33),
  argPericenter: columns('Argument of pericentre', 35, 42),
  meanAnomaly: columns('Mean anomaly', 44, 51),
  meanMotion: columns('Mean motion', 53, 63),
  revolution: columns('Revolution number', 64, 68),
} as const

const BLANK_1 = [2, 9, 18, 33, 44, 53, 62, 64]
const BLANK_2 = [2, 8, 17, 26, 34, 43, 52]

const MEND = 'Copy the line again from its source with its columns as they are.'

export const columnsOf = (line: Line, { from, to }: Columns): string => line.text.slice(from - 1, to)

/** "Inclination (columns 9–16)" */
export const named = ({ label, from, to }: Columns): string => from === to ? `${label} (column ${from})` : `${label} (columns ${from}–${to})`

/**
 * Holds a data line against the published layout: printable ASCII, 69 columns, blanks where blanks belong.
 * A missing checksum and text after column 69 are warnings.
 * @throws SetRefusal that names column and character
 */
export function checkLayout(line: Line, which: 1 | 2, warn: Warn): void {
  const { text, number } = line
  const used = text.trimEnd()
  const first = used.charCodeAt(0)
  if (first !== 0x31 && first !== 0x32) {
    throw new SetRefusal(number, 'columns', `Line ${which} of the set begins with ${describeCharacter(first)} in column 1 where "${which}" belongs, so every column is shifted. Remove what stands before it.`)
  }
  for (let i = 0; i < used.length && i < 69; i++) {
    const code = used.charCodeAt(i)
    if (code >= 0x20 && code < 0x7F) continue
    throw new SetRefusal(number, 'character', `Column ${i + 1} holds ${describeCharacter(code)}. A TLE has fixed columns of plain letters, digits, "+", "-", "." and blanks. ${MEND}`)
  }
  if (used.length < 68) {
    throw new SetRefusal(number, 'length', `The line has ${used.length} columns where 69 belong: it was cut, or blanks in it were collapsed. A TLE has fixed columns. ${MEND}`)
  }
  for (const column of which === 1 ? BLANK_1 : BLANK_2) {
    const code = used.charCodeAt(column - 1)
    if (code !== 0x20) throw new SetRefusal(number, 'columns', `Column ${column} holds ${describeCharacter(code)} where a blank belongs, so the columns are shifted. ${MEND}`)
  }
  if (used.length > 69) {
    if (used[69] !== ' ' && used[69] !== '\t') throw new SetRefusal(number, 'length', `The line has ${used.length} columns where 69 belong. ${MEND}`)
    warn(number, 'trailing-text', `Text after column 69, ${quote(used.slice(69).trim())}, was left out. Remove it if it means nothing.`)
  }
}

/** @throws SetRefusal `checksum` with the digit found and the digit expected */
export function checkChecksum(line: Line, warn: Warn): void {
  const expected = tleChecksum(line.text)
  const found = line.text[68]
  if (found === undefined || found === ' ' || found === '\t') {
    warn(line.number, 'checksum-missing', `The line has no checksum in column 69 (it would be ${expected}), so a mistyped digit cannot be noticed. Ask the source for whole lines.`)
  }
  else if (found !== String(expected)) {
    throw new SetRefusal(line.number, 'checksum', `The checksum in column 69 is ${quote(found)}, but the digits of the line give ${expected}: at least one character was changed. ${MEND}`)
  }
}
