import type { TableOut } from '#shared/schemas/tables'
import { formatDeg, formatHz, formatSignedHz, formatUtcTime } from '#shared/utils/format'
import { hertzDecimals } from './verdict-sentence'
import type { SpanMs, StripData } from './strips'

type Described = Pick<TableOut, 'maxElevationDeg' | 'culmination' | 'allowanceHz' | 'worstResidualHz' | 'retunes'>

/** What the strips show, for who cannot see them. */
export function stripsSentence({ needed }: StripData, table: Described, quiet: readonly SpanMs[] = []): string {
  const first = needed.value[0]!
  const last = needed.value.at(-1)!
  const decimals = hertzDecimals(table.allowanceHz)
  const rows = table.retunes
  const low = Math.min(...rows.map(row => row.residualMinHz))
  const high = Math.max(...rows.map(row => row.residualMaxHz))
  const followed = rows.length === 0
    ? 'No retune follows it.'
    : `${rows.length} ${rows.length === 1 ? 'retune follows' : 'retunes follow'} it and leave between ${formatSignedHz(low, decimals)} and ${formatSignedHz(high, decimals)} Hz.`
  return `The needed offset ${last < first ? 'falls' : 'rises'} from ${formatSignedHz(first)} Hz at AOS to ${formatSignedHz(last)} Hz at LOS. ${followed} `
    + `Budgeted, that is ${formatHz(table.worstResidualHz, decimals)} Hz at worst, of ${formatHz(table.allowanceHz, decimals)} Hz allowed. `
    + (quiet.length === 0 ? '' : `No retune takes effect from ${quiet.map(({ fromMs, toMs }) => `${formatUtcTime(fromMs)} to ${formatUtcTime(toMs)}`).join(' and from ')}. `)
    + `Elevation culminates at ${formatDeg(table.maxElevationDeg)}° at ${formatUtcTime(Date.parse(table.culmination))}.`
}
