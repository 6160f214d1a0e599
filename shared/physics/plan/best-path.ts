import type { Path } from './choose-path'
import type { Corridor, Curve, Grid } from './corridor'
import { corridorOf } from './corridor'
import { chooseRows, fewestRows, isLargeSearch } from './fewest-rows'
import type { Limits } from './hold-paths'

/**
 * Least rows, then least ratio of residual to half-width, then earliest, then lowest; null where the half-width has no plan.
 *
 * @card Best rows: least rows, then the least share of the half-width.
 * @formula least N, then least x with |f − g_i| ≤ x·h, by bisection
 * @source mechanics of intervals
 * @units Hz, ms → ms, steps of the grid
 * @frame from the radio’s reference step
 * @range half-widths above 0
 * @tolerance equal to exhaustive search (plan/best-path.test.ts)
 */
export function bestPath(curve: Curve, grid: Grid, limits: Limits, halfWidthHz: readonly number[]): Path | null {
  if (halfWidthHz.some(h => h <= 0)) return null
  const corridor = (ratio: number) => corridorOf(curve, grid, j => ratio * halfWidthHz[j]!)
  const rows = fewestRows(corridor(1), limits)
  if (rows === null) return null
  const ratio = leastThat(0, 1, limits, corridor, rows)
  return chosenAbove(ratio, limits, rows, corridor)
}

/**
 * The plan with half-width max(h, x), x the least that has one; then least rows, earliest, lowest.
 *
 * @card Nearest rows: what comes closest where no plan fits.
 * @formula least x with |f − g_i| ≤ max(h, x)
 * @source mechanics of intervals
 * @units Hz, ms → ms, steps of the grid
 * @frame from the radio’s reference step
 * @range any half-width
 * @tolerance excess as the checker finds it (plan/plan-retunes.test.ts)
 */
export function widenedPath(curve: Curve, grid: Grid, limits: Limits, halfWidthHz: readonly number[]): Path {
  const corridor = (x: number) => corridorOf(curve, grid, j => Math.max(halfWidthHz[j]!, x))
  let enough = grid.stepHz
  while (fewestRows(corridor(enough), limits) === null) enough *= 2
  const x = leastThat(0, enough, limits, corridor, Infinity)
  return chosenAbove(x, limits, fewestRows(corridor(x), limits) ?? Infinity, corridor)
}

/**
 * Least width above `fails` at which `rows` suffice, to a part in 10⁹ of `serves`, which is known to; to a part in 10⁴ where long
 * searches are needed to tell.
 */
function leastThat(fails: number, serves: number, limits: Limits, corridor: (width: number) => Corridor, rows: number): number {
  let [low, high] = [fails, serves]
  let precision = 1e-9
  while (high - low > precision * serves) {
    const middle = (low + high) / 2
    const c = corridor(middle)
    const onSearch = () => {
      if (isLargeSearch(c, limits)) precision = 1e-4
    }
    if (fewestRows(c, limits, rows, onSearch) === null) low = middle
    else high = middle
  }
  return high
}

/** The rows at the least width. On a thinned grid a search can miss where the other way of asking did not: a little wider, then. */
function chosenAbove(width: number, limits: Limits, rows: number, corridor: (width: number) => Corridor): Path {
  for (let wider = width; ; wider = wider * 1.001 + 1e-9) {
    const least = wider === width ? rows : fewestRows(corridor(wider), limits) ?? rows
    const path = chooseRows(corridor(wider), limits, least)
    if (path !== null) return path
  }
}
