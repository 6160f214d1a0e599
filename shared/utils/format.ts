import { DateTime } from 'luxon'

/** Shown for what is not known. */
const NOTHING = '–'
const MINUS = '\u2212'
/** Narrow, and no line is broken at it. */
const GROUP = '\u202F'

function digits(value: number, decimals: number): string {
  const [whole = '', fraction] = Math.abs(value).toFixed(decimals).split('.')
  let grouped = ''
  for (let i = 0; i < whole.length; i++) grouped += (i > 0 && (whole.length - i) % 3 === 0 ? GROUP : '') + whole[i]
  return fraction === undefined ? grouped : `${grouped}.${fraction}`
}

function fixed(value: number | null | undefined, decimals: number, plus: boolean): string {
  if (value === null || value === undefined || !Number.isFinite(value) || Math.abs(value) >= 1e21) return NOTHING
  const shown = digits(value, decimals)
  const isZero = !/[1-9]/.test(shown)
  const sign = isZero ? '' : value < 0 ? MINUS : plus ? '+' : ''
  return sign + shown
}

type Shown = number | null | undefined

/** Hertz grouped by thousands with narrow no-break spaces and a real minus sign: 437 512 340. "–" for what is not known. */
export const formatHz = (hz: Shown, decimals = 0): string => fixed(hz, decimals, false)

/** As `formatHz`, with a plus sign where it is positive: +10 204. */
export const formatSignedHz = (hz: Shown, decimals = 0): string => fixed(hz, decimals, true)

/** Decibels, two decimals: 0.58. */
export const formatDb = (db: Shown, decimals = 2): string => fixed(db, decimals, false)

/** Degrees, one decimal: 64.2. */
export const formatDeg = (deg: Shown, decimals = 1): string => fixed(deg, decimals, false)

export type TimeStep = 'minute' | 'second' | 'millisecond'
const UP_TO: Readonly<Record<TimeStep, number>> = { minute: 16, second: 19, millisecond: 23 }

/** Years 0000 to 9999, which ISO 8601 writes with four digits. */
const FIRST_MS = -62_167_219_200_000
const LAST_MS = 253_402_300_799_999
const isInstant = (ms: Shown): ms is number => typeof ms === 'number' && ms >= FIRST_MS && ms <= LAST_MS

/** ISO text to the step; what is beyond it is dropped, as a clock does. */
const iso = (ms: number, step: TimeStep) => new Date(Math.floor(ms)).toISOString().slice(0, UP_TO[step])

/** ISO date and time with its zone: 2026-12-01 03:12:45.123 UTC. */
export const formatUtc = (ms: Shown, step: TimeStep = 'millisecond'): string => isInstant(ms) ? `${iso(ms, step).replace('T', ' ')} UTC` : NOTHING

/** Time of day with its zone: 03:12:45 UTC; `label: false` where the column or axis says UTC. */
export function formatUtcTime(ms: Shown, step: TimeStep = 'second', { label = true } = {}): string {
  return isInstant(ms) ? `${iso(ms, step).slice(11)}${label ? ' UTC' : ''}` : NOTHING
}

const SECOND = 1000
const MINUTE = 60 * SECOND
const HOUR = 60 * MINUTE
const DAY = 24 * HOUR

function span(ms: number): string {
  if (ms < 2 * MINUTE) return `${Math.floor(ms / SECOND)} s`
  if (ms < 2 * HOUR) return `${Math.floor(ms / MINUTE)} min`
  if (ms < 2 * DAY) return `${Math.floor(ms / HOUR)} h ${Math.floor(ms % HOUR / MINUTE)} min`
  return `${Math.floor(ms / DAY)} d ${Math.floor(ms % DAY / HOUR)} h`
}

/** Time until something (positive) or since it (negative), never rounded up: "in 12 min", "38 s ago", "now". */
export function formatCountdown(ms: Shown): string {
  if (!isInstant(ms)) return NOTHING
  if (Math.abs(ms) < SECOND) return 'now'
  return ms > 0 ? `in ${span(ms)}` : `${span(-ms)} ago`
}

/**
 * Local time of a zone, to stand beside UTC, with its offset: 2026-12-01 16:57 (UTC+13:45).
 * @param zone name of the IANA time zone database
 * @throws RangeError for a zone that does not exist
 */
export function formatLocalTime(ms: Shown, zone: string): string {
  if (!isInstant(ms)) return NOTHING
  const local = DateTime.fromMillis(Math.floor(ms), { zone, locale: 'en' })
  if (!local.isValid) throw new RangeError(`There is no time zone "${zone}"; give a name such as Pacific/Auckland.`)
  return `${local.toFormat('yyyy-MM-dd HH:mm')} (UTC${local.toFormat('ZZ').replace('-', MINUS)})`
}
