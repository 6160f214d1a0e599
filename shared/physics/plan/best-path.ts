import type { Path } from './choose-path'
import type { Corridor, Curve, Grid } from './corridor'
import { corridorOf } from './corridor'
import { chooseRows, fewestRows } from './fewest-rows'
import type { Limits } from './hold-paths'

/** Ratios are found in this many steps to the half-width, widths in as many to the first that serves. */
export const STEPS = 2 ** 13

/**
 * Least rows, then least ratio of residual to half-width, in steps of 1/8192, then earliest, then lowest; null where the half-width
 * has no plan. The ratio is the least multiple of 1/8192 with rows that keep |f − g_i| ≤ ratio·h: settings are chosen by hertz
 * of a grid and instants by milliseconds, and nobody hears less.
 *
 * @card Best rows: least rows, then the least share of the half-width.
 * @formula least N, then least n with |f − g_i| ≤ n/8192·h, by halving
 * @source mechanics of intervals
 * @units Hz, ms → ms, steps of the grid
 * @frame from the radio’s reference step
 * @range half-widths above 0
 * @tolerance equal to exhaustive search (plan/best-path.test.ts)
 */
export function bestPath(curve: Curve, grid: Grid, limits: Limits, halfWidthHz: readonly number[]): Path | null {
  if (halfWidthHz.some(h => h <= 0)) return null
  let reused: Corridor | undefined
  const corridor = (step: number) => reused = corridorOf(curve, grid, j => step / STEPS * halfWidthHz[j]!, reused)
  const rows = fewestRows(corridor(STEPS), limits)
  if (rows === null) return null
  const serves = (step: number) => fewestRows(corridor(step), limits, rows) !== null
  const { swingHz, widestHz } = swingOf(curve, halfWidthHz)
  // N rows cover a swing of 2·N·h at most, and of 2·h beside N − 1 jumps; what the grid takes is half a step of it or so.
  const leapsHz = rows === 1 ? 0 : (rows - 1) * limits.jump * grid.stepHz
  const leastHz = Math.max(swingHz / (2 * rows), (swingHz - leapsHz) / 2, leastByDwell(curve, limits.dwell).leastHz)
  const fails = Math.max(0, Math.floor(STEPS * leastHz / widestHz * (1 - 1e-9)) - 1)
  const step = leastStep(serves, fails, STEPS, Math.ceil(STEPS * grid.stepHz / 2 / widestHz) + 2)
  return chosenAbove(step, STEPS, limits, rows, corridor)
}

/**
 * The plan with half-width max(h, x), x the least that has one, in steps of 1/8192 of the first that is tried and serves; then
 * least rows, earliest, lowest. The first tried is what a dwell leaves where the curve is fastest.
 *
 * @card Nearest rows: what comes closest where no plan fits.
 * @formula least x with |f − g_i| ≤ max(h, x)
 * @source mechanics of intervals
 * @units Hz, ms → ms, steps of the grid
 * @frame from the radio’s reference step
 * @range any half-width; x to a part in 10⁴
 * @tolerance excess as the checker finds it (plan/plan-retunes.test.ts)
 */
export function widenedPath(curve: Curve, grid: Grid, limits: Limits, halfWidthHz: readonly number[]): Path {
  let reused: Corridor | undefined
  const { leastHz, fastestHz, from, to } = leastByDwell(curve, limits.dwell)
  let enough = grid.stepHz + fastestHz
  const corridor = (step: number) => reused = corridorOf(curve, grid, j => Math.max(halfWidthHz[j]!, step / STEPS * enough), reused)
  const serves = (step: number) => fewestRows(corridor(step), limits) !== null
  while (!serves(STEPS)) enough *= 2
  // Where the half-width itself leaves less than the dwell asks, x has to give it.
  const isBound = halfWidthHz.every((h, j) => h < leastHz || curve.timeMs[j]! < from || curve.timeMs[j]! > to)
  const fails = isBound ? Math.max(0, Math.floor(STEPS * leastHz / enough * (1 - 1e-9)) - 1) : 0
  const step = leastStep(serves, fails, STEPS, Math.ceil(STEPS * grid.stepHz / 2 / enough) + 2)
  return chosenAbove(step, Infinity, limits, fewestRows(corridor(step), limits) ?? Infinity, corridor)
}

/** Least step above `fails` that serves, where `enough` does and so does what is above one that does; looked for at `stride` first, and on in longer ones. */
function leastStep(serves: (step: number) => boolean, fails: number, enough: number, stride: number): number {
  let low = fails
  let high = enough
  for (let reach = stride; low + reach < high; reach *= 4) {
    if (serves(low + reach)) high = low + reach
    else low += reach
  }
  while (high - low > 1) {
    const middle = Math.floor((low + high) / 2)
    if (serves(middle)) high = middle
    else low = middle
  }
  return high
}

/** The rows at the least width. On a thinned grid a search can miss where the other way of asking did not: a little wider, then. */
function chosenAbove(step: number, most: number, limits: Limits, rows: number, corridor: (step: number) => Corridor): Path {
  for (let wider = step; ; wider = Math.max(wider + 1, Math.min(most, Math.ceil(wider * 1.001)))) {
    const least = wider === step ? rows : fewestRows(corridor(wider), limits) ?? rows
    const path = chooseRows(corridor(wider), limits, least)
    if (path !== null) return path
  }
}

/** Largest swing of any workable part, and the largest half-width. */
function swingOf({ offsetHz, beginsPart }: Curve, halfWidthHz: readonly number[]): { swingHz: number, widestHz: number } {
  let [swingHz, widestHz, lowest, highest] = [0, 0, Infinity, -Infinity]
  for (let j = 0; j < offsetHz.length; j++) {
    if (beginsPart[j]) [lowest, highest] = [Infinity, -Infinity]
    lowest = Math.min(lowest, offsetHz[j]!)
    highest = Math.max(highest, offsetHz[j]!)
    swingHz = Math.max(swingHz, highest - lowest)
    widestHz = Math.max(widestHz, halfWidthHz[j]!)
  }
  return { swingHz, widestHz }
}

/**
 * A half-width that every plan needs where the curve is fastest, since some row lasts a dwell there: half a dwell of the least
 * rate within a dwell of it, `from` to `to`. 0 near a part's ends and where the curve turns.
 */
function leastByDwell({ timeMs, offsetHz, beginsPart }: Curve, dwell: number): { leastHz: number, fastestHz: number, from: number, to: number } {
  const rateAt = (j: number) => j === 0 || beginsPart[j] || timeMs[j]! <= timeMs[j - 1]! ? 0 : (offsetHz[j]! - offsetHz[j - 1]!) / (timeMs[j]! - timeMs[j - 1]!)
  let fastest = 0
  for (let j = 1; j < timeMs.length; j++) if (Math.abs(rateAt(j)) > Math.abs(rateAt(fastest))) fastest = j
  const middle = fastest === 0 ? timeMs[0]! : (timeMs[fastest - 1]! + timeMs[fastest]!) / 2
  const [from, to] = [middle - dwell, middle + dwell]
  const fastestHz = Math.abs(rateAt(fastest)) * dwell / 2
  if (timeMs[0]! > from || timeMs[timeMs.length - 1]! < to) return { leastHz: 0, fastestHz, from, to }
  const sign = Math.sign(rateAt(fastest))
  let least = Infinity
  for (let j = 1; j < timeMs.length; j++) if (timeMs[j]! > from && timeMs[j - 1]! < to) least = Math.min(least, sign * rateAt(j))
  return { leastHz: Math.max(0, least) * dwell / 2, fastestHz, from, to }
}
