import type { Corridor, Curve, Grid } from './corridor'
import { corridorOf } from './corridor'
import type { LinePath } from './line-chain'
import { chainOf } from './line-chain'
import { searchedWithJumps } from './line-jumps'
import type { LineTask } from './line-reach'
import { furthestLines, gridlessRows, searchedLines } from './line-reach'
import type { SlopeBounds, Slopes } from './lines'
import { someLineOver } from './lines'
import type { QuietStretches } from './quiet'
import { lastFree, nextFree } from './quiet'

/** What binds rows that ramp, whole milliseconds from the plan's anchor and hertz. */
export interface RampLimits {
  readonly slopes: Slopes
  readonly bounds: SlopeBounds | null
  readonly dwell: number
  /** Largest jump at a retune at a workable instant; Infinity for none. */
  readonly jumpHz: number
  /** The first row may not take effect before this; −Infinity for no such bound. */
  readonly notBefore: number
  readonly quiet: QuietStretches
  /** How much earlier than needed the first row takes effect. */
  readonly lead: number
  /** Rows are set inside this band while something listens, hertz from the grid's reference. */
  readonly band: readonly [lowHz: number, highHz: number]
}

/** A way of finding starts: searched or not, in a corridor no wider than `narrowHz`, the first row `lead` early. */
interface Way { readonly searches: boolean, readonly narrowHz: number, readonly lead: number }

/** To what share of the width the narrowest is found; searches take long. */
const PRECISION = { furthest: 1e-3, searched: 2e-2 }

/**
 * Rows that ramp, as few as are found: no more than lines of any setting and slope need in a half-width smaller by q/2 + σℓ/4, ℓ the
 * longest piece, and fewer where a search finds them. Then least ratio of residual to half-width, then earliest starts, then lowest
 * settings. Where a jump limit J binds: no more than such lines need in min(h, J/2) less q/2 + σℓ/4, since rows within half the limit of
 * the curve jump by no more than it; a search over starts and values finds fewer, and in short plans the fewest. Null where nothing is found.
 *
 * @card Rows that ramp: as few as are found, then closest, earliest, lowest.
 * @formula |f − g_i − s_i·(t − e_i)| ≤ h, both rows at a retune
 * @source longest lines through a corridor by its hulls
 * @units Hz, Hz/s, ms → rows
 * @frame the radio’s dial
 * @range ratio to 0.1 %, searched ones to 2 %
 * @tolerance between gridless lines in h and in min(h, J/2) − q/2 − σℓ/4 (predict/ramps.test.ts); the fewest in short plans (plan/ramp-path.test.ts)
 */
export function rampPath(curve: Curve, grid: Grid, limits: RampLimits, halfWidthHz: readonly number[]): LinePath | null {
  if (halfWidthHz.some(h => h <= 0)) return null
  const corridor = (ratio: number) => corridorOf(curve, grid, j => ratio * halfWidthHz[j]!)
  const found = firstWay(corridor(1), limits, true)
  return found && refined(corridor, { fails: 0, serves: 1, rows: found.path.starts.length }, limits, found)
}

/**
 * Rows with half-width max(h, x), x the least that has any. What no x can keep is left to the checker: drift first, then jumps.
 *
 * @card Widened ramps: the rows that miss by least, where none serve.
 * @formula least x with rows in max(h, x)
 * @source bisection
 * @units Hz, Hz/s, ms → rows
 * @frame the radio’s dial
 * @range x to 0.1 % of the first width that serves
 * @tolerance keeps to the band and misses by what that costs (predict/converter.test.ts)
 */
export function widenedRampPath(curve: Curve, grid: Grid, given: RampLimits, halfWidthHz: readonly number[]): LinePath {
  const corridor = (x: number) => corridorOf(curve, grid, j => Math.max(halfWidthHz[j]!, x))
  const unbanded = { ...given, band: [-Infinity, Infinity] as const }
  const free = { ...unbanded, bounds: null, jumpHz: Infinity }
  for (const limits of [given, { ...given, bounds: null }, { ...given, bounds: null, jumpHz: Infinity }, free, { ...free, quiet: [], notBefore: -Infinity }]) {
    for (let enough = grid.stepHz; enough < 1e12; enough *= 4) {
      const found = firstWay(corridor(enough), limits, false)
      if (found) return refined(corridor, { fails: 0, serves: enough, rows: Infinity }, limits, found)
    }
  }
  throw new RangeError('No row can be planned at all: check the radio\'s step and the workable parts.')
}

/** Of all ways that lead to rows, the first with the fewest; with `searches`, starts are searched where furthest reach is not proven best. */
function firstWay(c: Corridor, limits: RampLimits, searches: boolean): { way: Way, path: LinePath } | null {
  const widest = c.lowHz.reduce((most, low, j) => Math.max(most, c.highHz[j]! - low), 0)
  const narrows = limits.jumpHz >= widest ? [] : [4, 3, 2, 1.5, 1.25, 1].map(times => times * limits.jumpHz / 2).filter(narrow => narrow < widest / 2)
  let best: { way: Way, path: LinePath } | null = null
  const consider = (way: Way) => {
    const path = pathBy(way, c, limits, (best?.path.starts.length ?? Infinity) - 1)
    if (path) best = { way, path }
  }
  const leads = limits.lead >= limits.dwell ? [limits.lead] : [limits.lead, limits.dwell]
  for (const lead of leads) consider({ searches: false, narrowHz: Infinity, lead })
  const found = () => best?.path.starts.length ?? Infinity
  const least = searches ? gridlessRows(taskOf(c, limits, limits.lead)) : 0
  if (least === Infinity || found() <= least) return best
  if (searches) for (const lead of leads) consider({ searches: true, narrowHz: Infinity, lead })
  if (found() > least) for (const narrowHz of narrows) for (const lead of leads) consider({ searches: false, narrowHz, lead })
  return best
}

function taskOf(c: Corridor, { slopes, bounds, dwell, quiet, notBefore, band }: RampLimits, lead: number): LineTask {
  const first = Math.floor(c.timeMs[0]!)
  const corridor = {
    ...c, lowHz: c.lowHz.map(low => Math.max(low, band[0])), highHz: c.highHz.map(high => Math.min(high, band[1])),
    grid: { ...c.grid, least: -Infinity, most: Infinity },
  }
  const early = lastFree(quiet, first - lead)
  const start = early >= notBefore ? early : nextFree(quiet, Math.max(first - lead, Math.ceil(notBefore)))
  return { corridor, slopes, bounds, dwell, quiet, first: Math.min(start, first) }
}

function pathBy({ searches, narrowHz, lead }: Way, wide: Corridor, limits: RampLimits, most: number): LinePath | null {
  if (most < 1) return null
  const task = taskOf({
    ...wide,
    lowHz: wide.lowHz.map((low, j) => Math.max(low, (low + wide.highHz[j]!) / 2 - narrowHz)),
    highHz: wide.highHz.map((high, j) => Math.min(high, (wide.lowHz[j]! + high) / 2 + narrowHz)),
  }, limits, lead)
  const furthest = furthestLines(task, most)
  if (!searches) return furthest && chainOf(task, furthest, limits.jumpHz)
  const starts = limits.jumpHz < Infinity ? searchedWithJumps(task, most, limits.jumpHz, furthest ?? []) : searchedLines(task, most, furthest ?? [])
  return starts && chainOf(task, starts, limits.jumpHz)
}

/** The same way in the narrowest corridor that at most `rows` rows serve, and there the earliest starts. */
function refined(corridor: (width: number) => Corridor, { fails, serves, rows }: { fails: number, serves: number, rows: number }, limits: RampLimits, { way, path }: { way: Way, path: LinePath }): LinePath {
  let [low, high, best] = [fails, serves, path]
  const precision = way.searches ? PRECISION.searched : PRECISION.furthest
  while (high - low > precision * serves) {
    const middle = (low + high) / 2
    const closer = pathBy(way, corridor(middle), limits, rows)
    if (closer) [high, best] = [middle, closer]
    else low = middle
  }
  const task = taskOf(corridor(high), limits, way.lead)
  const starts = earliest(task, best.starts)
  return (starts && chainOf(task, starts, limits.jumpHz)) ?? best
}

/** From the last row back, the earliest start from which a line serves until the next; the first row stays. Null where a grid spoils it. */
function earliest(task: LineTask, starts: readonly number[]): number[] | null {
  const early = [...starts]
  for (let i = starts.length - 1; i >= 1; i--) {
    const end = early[i + 1] ?? Infinity
    const serves = (start: number) => someLineOver(task.corridor, start, end, task.slopes, task.bounds)
    let [bad, good] = [starts[i - 1]! + task.dwell - 1, Math.min(starts[i]!, end - task.dwell)]
    if (!serves(good)) return null
    while (good - bad > 1) {
      const middle = Math.floor((bad + good) / 2)
      if (serves(middle)) good = middle
      else bad = middle
    }
    early[i] = nextFree(task.quiet, good)
    if (early[i]! > starts[i]!) early[i] = starts[i]!
  }
  const isApart = early.every((start, i) => i === 0 || start - early[i - 1]! >= task.dwell)
  const isServed = early.every((start, i) => someLineOver(task.corridor, start, early[i + 1] ?? Infinity, task.slopes, task.bounds))
  return isApart && isServed ? early : null
}
