import type { Line } from '../lines'
import type { Warn } from '../reading'
import { SetRefusal } from '../reading'
import { parseWhole } from '../decimal'
import { quote } from '../show-value'
import { LINE_1, columnsOf, named } from './columns'

const DAY_US = 86_400_000_000
/** Microseconds in one unit of the eighth decimal of a day, exactly. */
const US_PER_1E8_DAY = 864
const DAY = /^(\d{1,3})\.(\d{1,10})$/

/** Two-digit years: 57 to 99 are 1957 to 1999, 00 to 56 are 2000 to 2056. Source: the published TLE format. */
export const fullYear = (twoDigits: number): number => twoDigits >= 57 ? 1900 + twoDigits : 2000 + twoDigits

export const isLeapYear = (year: number): boolean => year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0)

/**
 * A TLE's epoch in whole microseconds since 1970-01-01T00:00:00Z, UTC. Day 1.0 is 1 January 00:00. Integer arithmetic:
 * the eight printed decimals of a day are multiples of 864 µs, so nothing is rounded.
 * @throws SetRefusal for a day outside the year; day 366 of a common year is a warning
 */
export function readTleEpoch(line1: Line, warn: Warn): number {
  const yearText = columnsOf(line1, LINE_1.epochYear)
  const twoDigits = yearText.includes(' ') ? null : parseWhole(yearText, 2)
  if (twoDigits === null) throw new SetRefusal(line1.number, 'epoch', `${named(LINE_1.epochYear)} reads ${quote(yearText)}: two digits belong there. Copy the line again from its source.`)
  const dayText = columnsOf(line1, LINE_1.epochDay)
  const parts = DAY.exec(dayText.trim())
  if (!parts) throw new SetRefusal(line1.number, 'epoch', `${named(LINE_1.epochDay)} reads ${quote(dayText)}: a day of the year with its fraction, such as 334.51234567, belongs there. Copy the line again from its source.`)
  const year = fullYear(twoDigits)
  const day = Number(parts[1])
  if (day < 1 || day > 366) throw new SetRefusal(line1.number, 'epoch', `${named(LINE_1.epochDay)} is ${quote(dayText.trim())}: days of a year run from 1 to ${isLeapYear(year) ? 366 : 365}. Ask for this set again from its source.`)
  if (day === 366 && !isLeapYear(year)) {
    warn(line1.number, 'epoch-day-366', `${named(LINE_1.epochDay)} is day 366, but ${year} has 365 days; it is read as 1 January ${year + 1}. Check the epoch with the source.`)
  }
  const decimals = parts[2]!
  const fractionUs = decimals.length <= 8
    ? Number(decimals.padEnd(8, '0')) * US_PER_1E8_DAY
    : Math.round(Number(decimals) * US_PER_1E8_DAY / 10 ** (decimals.length - 8))
  return Date.UTC(year, 0, 1) * 1000 + (day - 1) * DAY_US + fractionUs
}
