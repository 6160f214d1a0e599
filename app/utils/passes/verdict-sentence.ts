import type { TableOut } from '#shared/schemas/tables'
import { formatHz, formatUtcTime } from '#shared/utils/format'

type Judged = Pick<TableOut, 'verdict' | 'worstResidualHz' | 'worstAt' | 'allowanceHz' | 'margin' | 'excess' | 'faults' | 'workable' | 'aos' | 'culmination' | 'los'>

const lengthMs = (spans: readonly { from: string, to: string }[]) => spans.reduce((sum, span) => sum + Date.parse(span.to) - Date.parse(span.from), 0)
const counted = (count: number, one: string, many: string) => `${count} ${count === 1 ? one : many}`

/** Small allowances are read to a tenth of a hertz. */
export const hertzDecimals = (allowanceHz: number): number => allowanceHz < 100 ? 1 : 0

/** Margin as it is read: ×8.3, ×1.14, ×>99; never rounded up, since 1 is the edge. */
export function formatMargin(margin: number): string {
  if (margin >= 100) return '×>99'
  // The small addition undoes 1.14 becoming 113.99…, not a real shortfall.
  return margin >= 2 ? `×${(Math.floor(margin * 10 + 1e-9) / 10).toFixed(1)}` : `×${(Math.floor(margin * 100 + 1e-9) / 100).toFixed(2)}`
}

function seconds(ms: number): string {
  return ms < 10_000 ? `${(ms / 1000).toFixed(1)} s` : ms < 600_000 ? `${Math.round(ms / 1000)} s` : `${Math.round(ms / 60_000)} min`
}

/** Which part of the pass is past the allowance. */
function where({ excess, workable, culmination, worstAt }: Judged): string {
  const total = lengthMs(excess)
  if (total >= 0.99 * lengthMs(workable)) return 'over the whole workable part'
  const long = `for ${seconds(total)}`
  if (excess.length > 1) return `${long} in ${excess.length} spans, worst at ${formatUtcTime(Date.parse(worstAt))}`
  const [span] = excess
  if (!span) return `at ${formatUtcTime(Date.parse(worstAt))}`
  const peak = Date.parse(culmination)
  if (Date.parse(span.from) <= peak && peak <= Date.parse(span.to)) return `${long} around culmination`
  return `${long} from ${formatUtcTime(Date.parse(span.from))}`
}

/** The verdict in a sentence with its number: what a person needs who reads nothing else. */
export function verdictSentence(table: Judged): string {
  const decimals = hertzDecimals(table.allowanceHz)
  const hz = (value: number) => `${formatHz(value, decimals)} Hz`
  const faults = table.faults.length ? `${counted(table.faults.length, 'rule is', 'rules are')} broken` : ''
  if (table.worstResidualHz > table.allowanceHz) {
    return `Breaks: ${hz(table.worstResidualHz - table.allowanceHz)} past the allowance ${where(table)}${faults && `; ${faults} as well`}.`
  }
  const worst = `at worst ${hz(table.worstResidualHz)} of ${hz(table.allowanceHz)} allowed, at ${formatUtcTime(Date.parse(table.worstAt))}, margin ${formatMargin(table.margin)}`
  const word = { holds: 'Holds', tight: 'Tight', breaks: 'Breaks' }[table.verdict]
  return faults ? `${word}: ${faults}; the residual is ${worst}.` : `${word}: ${worst}.`
}
