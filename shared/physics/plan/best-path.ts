import type { Path } from './choose-path'
import type { Curve, Grid } from './corridor'
import { corridorOf } from './corridor'
import { chooseRows, fewestRows } from './fewest-rows'
import type { Limits } from './hold-paths'

/** Least rows, then least ratio of residual to half-width, then earliest, then lowest; null where the half-width has no plan. */
export function bestPath(curve: Curve, grid: Grid, limits: Limits, halfWidthHz: readonly number[]): Path | null {
  if (halfWidthHz.some(h => h <= 0)) return null
  const corridor = (ratio: number) => corridorOf(curve, grid, j => ratio * halfWidthHz[j]!)
  const rows = fewestRows(corridor(1), limits)
  if (rows === null) return null
  let ratio = leastThat(0, 1, ratio => fewestRows(corridor(ratio), limits, rows) !== null)
  // A search on a thinned grid can lose at a ratio just above what it found; the whole half-width always serves.
  let path = chooseRows(corridor(ratio), limits, rows)
  for (; path === null && ratio < 1; path = chooseRows(corridor(ratio), limits, rows)) ratio = Math.min(1, ratio * 1.001 + 1e-6)
  return path
}

/** The plan with half-width max(h, x), x the least that has one. */
export function widenedPath(curve: Curve, grid: Grid, limits: Limits, halfWidthHz: readonly number[]): Path {
  const widened = (x: number) => halfWidthHz.map(h => Math.max(h, x))
  const serves = (x: number) => fewestRows(corridorOf(curve, grid, j => widened(x)[j]!), limits) !== null
  let enough = grid.stepHz
  while (!serves(enough)) enough *= 2
  const x = leastThat(0, enough, serves)
  // Somewhere above the least x that was found to serve there is a plan, at the latest at twice the last bracket.
  for (let wider = x; ; wider = wider * 1.001 + 1e-6) {
    const path = bestPath(curve, grid, limits, widened(wider))
    if (path !== null) return path
  }
}

/** Least value above `fails` that satisfies `test`, to a part in 10⁹ of the bracket; `serves` is known to. */
function leastThat(fails: number, serves: number, test: (value: number) => boolean): number {
  let [low, high] = [fails, serves]
  for (let i = 0; i < 30; i++) {
    const middle = (low + high) / 2
    if (test(middle)) high = middle
    else low = middle
  }
  return high
}
