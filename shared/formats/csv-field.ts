/** A spreadsheet takes a text that begins so for a formula. */
const FORMULA_START = /^[=+\-@\t\r]/
const NEEDS_QUOTES = /[",\r\n]/

export type CsvValue = string | number | null

/**
 * One field of a CSV row (RFC 4180): numbers as ECMAScript writes them, null as nothing, texts that a spreadsheet would
 * run as a formula with an apostrophe before them, quotes where commas, quotes or line ends ask for them.
 * @throws TypeError for NaN and Infinity
 */
export function csvField(value: CsvValue): string {
  if (value === null) return ''
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new TypeError(`A CSV field cannot hold ${value}: give a finite number or null.`)
    return String(value)
  }
  const safe = FORMULA_START.test(value) ? `'${value}` : value
  return NEEDS_QUOTES.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe
}

/** A row with its line end. */
export const csvRow = (values: readonly CsvValue[]): string => `${values.map(csvField).join(',')}\r\n`
