import { isLeapYear } from '../tle/epoch'

export type EpochReading =
  | { readonly ok: true, readonly epochUtcUs: number, readonly warning?: { code: string, message: string } }
  | { readonly ok: false, readonly message: string }

const CALENDAR = /^(\d{4})-(\d{2})-(\d{2})([Tt ])(\d{2}):(\d{2}):(\d{2})(?:\.(\d{1,18}))?[Zz]?$/
const DAY_OF_YEAR = /^(\d{4})-(\d{3})([Tt ])(\d{2}):(\d{2}):(\d{2})(?:\.(\d{1,18}))?[Zz]?$/
const LONGEST = 48

/** The first year with anything to track, and the last whose microseconds fit a double exactly. */
const FIRST_YEAR = 1957
const LAST_YEAR = 2200

/** Days that ended in a leap second, as announced by the IERS (Bulletin C) until the end of 2016. */
const LEAP_SECOND_DAYS = new Set([
  '1972-06-30', '1972-12-31', '1973-12-31', '1974-12-31', '1975-12-31', '1976-12-31', '1977-12-31', '1978-12-31', '1979-12-31',
  '1981-06-30', '1982-06-30', '1983-06-30', '1985-06-30', '1987-12-31', '1989-12-31', '1990-12-31', '1992-06-30', '1993-06-30',
  '1994-06-30', '1995-12-31', '1997-06-30', '1998-12-31', '2005-12-31', '2008-12-31', '2012-06-30', '2015-06-30', '2016-12-31',
])

/** After the list ends a leap second may yet be announced, for the end of June or December. */
function mayHoldLeapSecond(date: string): boolean {
  return LEAP_SECOND_DAYS.has(date) || (date > '2016-12-31' && (date.endsWith('-06-30') || date.endsWith('-12-31')))
}

const SHAPE = 'Correct it: it must be written as 2026-11-30T12:17:46.665888 or 2026-334T12:17:46.665888, in UTC.'

/**
 * A CCSDS epoch (502.0-B-3 §7.5.10: calendar or day-of-year, fraction and Z optional) in whole microseconds since
 * 1970-01-01T00:00:00Z, UTC, rounded half up where more digits are given. A blank in place of T is read as UTC, never as
 * local time, with a warning. In a leap second the epoch is counted back from the midnight that ends it, so that
 * the time elapsed since then stays right; a warning says so.
 */
export function readOmmEpoch(text: string): EpochReading {
  const refuse = (message: string): EpochReading => ({ ok: false, message })
  if (text.length > LONGEST) return refuse(SHAPE)
  const calendar = CALENDAR.exec(text)
  const ordinal = calendar ? null : DAY_OF_YEAR.exec(text)
  const found = calendar ?? ordinal
  if (!found) {
    const offset = /[+-]\d{2}:?\d{2}$/.test(text) && text.includes(':')
    return refuse(offset ? `It carries an offset from UTC. ${SHAPE}` : SHAPE)
  }
  const year = Number(found[1])
  if (year < FIRST_YEAR || year > LAST_YEAR) return refuse(`The year must be from ${FIRST_YEAR} to ${LAST_YEAR}.`)

  const [separator, hourText, minuteText, secondText, decimals = ''] = found.slice(calendar ? 4 : 3)
  const [hour, minute, second] = [Number(hourText), Number(minuteText), Number(secondText)]
  let dayMs: number
  if (calendar) {
    const [month, day] = [Number(found[2]), Number(found[3])]
    dayMs = Date.UTC(year, month - 1, day)
    // A day that its month does not have lands in another month.
    if (month < 1 || month > 12 || new Date(dayMs).getUTCMonth() !== month - 1) return refuse(`There is no day ${found[1]}-${found[2]}-${found[3]}. Correct month and day.`)
  }
  else {
    const day = Number(found[2])
    const last = isLeapYear(year) ? 366 : 365
    if (day < 1 || day > last) return refuse(`Days of ${year} run from 001 to ${last}. Correct the day of the year.`)
    dayMs = Date.UTC(year, 0, day)
  }
  if (hour > 23 || minute > 59 || second > 60) return refuse('Hours run from 00 to 23, minutes and seconds from 00 to 59. Correct the time of day.')

  const fractionUs = Math.round(Number(`0.${decimals || '0'}`) * 1e6)
  const inLeapSecond = second === 60
  if (inLeapSecond) {
    const date = new Date(dayMs).toISOString().slice(0, 10)
    if (hour !== 23 || minute !== 59 || !mayHoldLeapSecond(date)) return refuse(`Second 60 exists only in a leap second, and ${date} has none at that time. Correct the time of day.`)
  }
  const secondsOfDay = hour * 3600 + minute * 60 + (inLeapSecond ? 59 : second)
  const epochUtcUs = (dayMs + secondsOfDay * 1000) * 1000 + fractionUs
  if (inLeapSecond) {
    return { ok: true, epochUtcUs, warning: { code: 'leap-second', message: 'The epoch lies in a leap second; it is counted back from the midnight after it, which keeps predictions after that midnight right. Nothing needs to be done.' } }
  }
  if (separator === ' ') {
    return { ok: true, epochUtcUs, warning: { code: 'epoch-blank', message: 'The epoch has a blank where T belongs; it is read as UTC. Check that the source does not mean local time.' } }
  }
  if (separator === 't') {
    return { ok: true, epochUtcUs, warning: { code: 'lower-case', message: 'The epoch has a small t where T belongs; it is read as T. Nothing needs to be done.' } }
  }
  return { ok: true, epochUtcUs }
}
