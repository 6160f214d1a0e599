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
  // N rows cover a swing of 2·N·h at most; what the grid takes is half a step of it or so.
  const fails = Math.max(0, Math.floor(STEPS * (swingHz / (2 * rows * widestHz)) * (1 - 1e-9)) - 1)
  const step = leastStep(serves, fails, STEPS, fails + Math.ceil(STEPS * grid.stepHz / 2 / widestHz) + 2)
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
  let enough = grid.stepHz + fastestHzPerMs(curve) * limits.dwell / 2
  const corridor = (step: number) => reused = corridorOf(curve, grid, j => Math.max(halfWidthHz[j]!, step / STEPS * enough), reused)
  const serves = (step: number) => fewestRows(corridor(step), limits) !== null
  while (!serves(STEPS)) enough *= 2
  const step = leastStep(serves, 0, STEPS, Math.floor(0.75 * STEPS))
  return chosenAbove(step, Infinity, limits, fewestRows(corridor(step), limits) ?? Infinity, corridor)
}

/** Least step above `fails` that serves, where `enough` does and so does what is above one that does; `guess` is tried first. */
function leastStep(serves: (step: number) => boolean, fails: number, enough: number, guess: number): number {
  let [low, high, next] = [fails, enough, guess]
  while (high - low > 1) {
    const middle = next > low && next < high ? next : Math.floor((low + high) / 2)
    next = NaN
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

function fastestHzPerMs({ timeMs, offsetHz, beginsPart }: Curve): number {
  let fastest = 0
  for (let j = 1; j < timeMs.length; j++) {
    if (!beginsPart[j] && timeMs[j]! > timeMs[j - 1]!) fastest = Math.max(fastest, Math.abs(offsetHz[j]! - offsetHz[j - 1]!) / (timeMs[j]! - timeMs[j - 1]!))
  }
  return fastest
}
