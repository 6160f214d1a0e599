import type { CsvValue } from './csv-field'
import { csvRow } from './csv-field'
import type { PublishedRetune, ServedTable } from './published-table'

type Column = readonly [header: string, value: (table: ServedTable, retune: PublishedRetune, row: number) => CsvValue]

const COLUMNS: readonly Column[] = [
  ['tableId', t => t.id],
  ['revision', t => t.revision],
  ['digest', t => t.digest],
  ['publishedAt', t => t.publishedAt],
  ['verdict', t => t.verdict],
  ['passId', t => t.pass.id],
  ['spacecraft', t => t.pass.spacecraft.name],
  ['catalogueNumber', t => t.pass.spacecraft.catalogueNumber],
  ['station', t => t.pass.station.name],
  ['aos', t => t.pass.aos],
  ['culmination', t => t.pass.culmination],
  ['los', t => t.pass.los],
  ['maxElevationDeg', t => t.pass.maxElevationDeg],
  ['link', t => t.link.name],
  ['direction', t => t.link.direction],
  ['carrierHz', t => t.link.carrierHz],
  ['symbolRateHz', t => t.link.symbolRateHz],
  ['radio', t => t.radio.name],
  ['latencyMs', t => t.radio.latencyMs],
  ['planMode', t => t.plan?.mode ?? null],
  ['cadenceS', t => t.plan?.cadenceS ?? null],
  ['converterLoHz', t => t.radio.converter?.loHz ?? null],
  ['converterInverts', t => t.radio.converter ? String(t.radio.converter.inverts) : null],
  ['turnaroundNumerator', t => t.link.turnaround?.numerator ?? null],
  ['turnaroundDenominator', t => t.link.turnaround?.denominator ?? null],
  ['allowanceHz', t => t.allowanceHz],
  ['worstResidualHz', t => t.worstResidualHz],
  ['elementSetSha256', t => t.elementSet.sha256],
  ['caution', t => t.caution],
  ['row', (_t, _r, row) => row],
  ['at', (_t, r) => r.at],
  ['frequencyHz', (_t, r) => r.frequencyHz],
  ['slopeHzPerS', (_t, r) => r.slopeHzPerS],
  ['dopplerHz', (_t, r) => r.dopplerHz],
  ['rangeRateMps', (_t, r) => r.rangeRateMps],
  ['azimuthDeg', (_t, r) => r.azimuthDeg],
  ['elevationDeg', (_t, r) => r.elevationDeg],
  ['residualMinHz', (_t, r) => r.residualMinHz],
  ['residualMaxHz', (_t, r) => r.residualMaxHz],
  ['lossDb', (_t, r) => r.lossDb],
  ['rows', t => t.retunes.length],
]

/**
 * A published tuning table as CSV (RFC 4180: CR LF, quotes where needed, a header row), UTF-8 without byte-order mark.
 *
 * One row a retune. The columns before `row` say which table it is and are the same in each row; `row` counts from 1 and the
 * last column, `rows`, is how many there are, so that a file cut short is noticed. Names are those of the JSON with
 * the unit at the end; instants are UTC with milliseconds and Z; `at` is when to command, `latencyMs` before it takes effect.
 * `digest` is that of the JSON, for checking against it. `catalogueNumber`, `lossDb` and what a link or radio does not have may be empty. A text that begins with
 * = + - @ or a tab has an apostrophe before it, so that no spreadsheet runs it; numbers never have.
 */
export function tableCsv(table: ServedTable): string {
  const rows = table.retunes.map((retune, i) => csvRow(COLUMNS.map(([, value]) => value(table, retune, i + 1))))
  return csvRow(COLUMNS.map(([header]) => header)) + rows.join('')
}
