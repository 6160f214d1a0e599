import { parseDecimal, parseWhole } from '../decimal'
import type { Line } from '../lines'
import type { Warn } from '../reading'
import { SetRefusal } from '../reading'
import { describeCharacter, quote } from '../show-value'
import type { Columns } from './columns'
import { columnsOf, named } from './columns'

const MEND = 'Copy the line again from its source.'

function refuseNumber(line: Line, where: Columns, belongs: string): never {
  const text = columnsOf(line, where)
  if (text.trim() === '') throw new SetRefusal(line.number, 'missing', `${named(where)} is blank. A missing value is not zero: ask for this set again from its source.`)
  let odd = ''
  for (let i = 0; i < text.length && odd === ''; i++) {
    const code = text.charCodeAt(i)
    const expected = (code >= 0x30 && code <= 0x39) || code === 0x20 || code === 0x2B || code === 0x2D || code === 0x2E
    if (!expected) odd = ` Column ${where.from + i} holds ${describeCharacter(code)}.`
  }
  throw new SetRefusal(line.number, 'number', `${named(where)} reads ${quote(text)}: ${belongs} belongs there.${odd} ${MEND}`)
}

/** A number with its point printed, such as " 97.4021" or "-.00000084". */
export function readFixed(line: Line, where: Columns): number {
  const text = columnsOf(line, where).trim()
  const value = text.includes('.') && !text.includes('e') && !text.includes('E') ? parseDecimal(text) : null
  return value ?? refuseNumber(line, where, 'a number with its decimal point')
}

/** Digits after an implied point; leading blanks count as zeros, with a warning. */
export function readImplied(line: Line, where: Columns, warn: Warn): number {
  const text = columnsOf(line, where)
  const digits = text.trimStart()
  if (parseWhole(digits, text.length) === null) refuseNumber(line, where, 'digits after an implied decimal point')
  if (digits.length < text.length) {
    warn(line.number, 'blank-padded', `${named(where)} reads ${quote(text)}, padded with blanks; it is read as 0.${digits.padStart(text.length, '0')}. Ask the source for zeros in place of the blanks.`)
  }
  return Number(`0.${digits.padStart(text.length, '0')}`)
}

/** Sign, five digits after an implied point, and a power of ten with its sign: " 31234-3" is 0.31234e-3. */
export function readPower(line: Line, where: Columns, warn: Warn): number {
  const text = columnsOf(line, where)
  const belongs = 'a sign or blank, five digits and a signed power of ten, such as " 31234-3",'
  const [sign, mantissa, powerSign, power] = [text[0]!, text.slice(1, 6), text[6]!, text.slice(7)]
  const digits = mantissa.trimStart()
  const readable = ' +-'.includes(sign) && ' +-'.includes(powerSign) && parseWhole(digits, 5) !== null && parseWhole(power, 1) !== null
  if (!readable) refuseNumber(line, where, belongs)
  if (digits.length < 5) {
    warn(line.number, 'blank-padded', `${named(where)} reads ${quote(text)}, padded with blanks, which are read as zeros. Ask the source for zeros in place of the blanks.`)
  }
  return Number(`${sign.trim()}0.${digits.padStart(5, '0')}e${powerSign.trim()}${power}`) + 0
}

/** A counter; null when blank. */
export function readCounter(line: Line, where: Columns): number | null {
  const text = columnsOf(line, where).trim()
  if (text === '') return null
  return parseWhole(text, 5) ?? refuseNumber(line, where, 'a whole number or nothing')
}
