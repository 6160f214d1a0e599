import type { Corridor, Curve, Grid } from './corridor'
import { corridorOf } from './corridor'
import type { LinePath } from './line-chain'
import type { SlopeBounds, Slopes } from './lines'
import { closestLine } from './lines'
import type { QuietStretches } from './quiet'
import { lastFree } from './quiet'
import { firstKnotAt, isWorkable } from './reach'

export interface CadenceLimits {
  /** Whole milliseconds from row to row. */
  readonly every: number
  readonly slopes: Slopes
  readonly bounds: SlopeBounds | null
  readonly notBefore: number
  readonly quiet: QuietStretches
  /** How much earlier than needed the first row takes effect. */
  readonly lead: number
}

/**
 * A row at every tick, counted from the first workable instant, each midway between the curve's extremes over its span and, where
 * the radio ramps, with the slope that leaves least. A tick in a quiet stretch, or with nothing workable before the next, is left out.
 *
 * @card Rows at a cadence: each midway over its span.
 * @formula e_i = A_1 + i·N; g_i = (max f + min f)/2 over its span, or the closest line
 * @source mechanics
 * @units ms, Hz → rows
 * @frame the radio’s dial
 * @range ticks in quiet spans or with nothing workable left out
 * @tolerance 80 Hz at culmination for a second’s hold at 437 MHz and 500 km (plan/cadence.test.ts)
 */
export function cadencePath(curve: Curve, grid: Grid, limits: CadenceLimits): LinePath {
  const c = corridorOf(curve, grid, () => 0)
  const first = Math.floor(c.timeMs[0]!)
  const end = c.timeMs[c.timeMs.length - 1]!
  const starts = [Math.min(first, Math.max(lastFree(limits.quiet, first - limits.lead), Math.ceil(limits.notBefore)))]
  for (let tick = first + limits.every; tick < end; tick += limits.every) {
    const isQuiet = limits.quiet.some(([from, to]) => tick >= from && tick <= to)
    if (!isQuiet && isAsked(c, tick, tick + limits.every)) starts.push(tick)
  }
  const lines = starts.map((start, i) => closestLine(c, start, starts[i + 1] ?? Infinity, limits.slopes, limits.bounds))
  return { starts, settings: lines.map(line => line.setting), slopes: lines.map(line => line.slope) }
}

function isAsked(c: Corridor, from: number, to: number): boolean {
  return isWorkable(c, from) || (c.timeMs[firstKnotAt(c, from)] ?? Infinity) <= to
}
