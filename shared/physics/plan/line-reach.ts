import type { Corridor } from './corridor'
import type { SlopeBounds, Slopes } from './lines'
import { roomOver, someLineOver } from './lines'
import type { QuietStretches } from './quiet'
import { lastFree, nextFree } from './quiet'
import { firstKnotAt } from './reach'
import type { Sides } from './sides'
import { growingSides } from './sides'

/** What rows that ramp are planned in: a corridor, the slopes the radio follows, and what binds from row to row. */
export interface LineTask {
  readonly corridor: Corridor
  readonly slopes: Slopes
  readonly bounds: SlopeBounds | null
  /** Whole milliseconds between rows. */
  readonly dwell: number
  readonly quiet: QuietStretches
  /** First row's instant of effect, at or before the first workable instant. */
  readonly first: number
}

type Serves = (effect: number, to: number, sides: Sides) => boolean

const served = ({ corridor, slopes, bounds }: LineTask): Serves => (effect, to, sides) => someLineOver(corridor, effect, to, slopes, bounds, sides)

/**
 * Latest whole instant to which one line of the grid serves that takes effect at `effect`; Infinity when to the end; below it when none.
 *
 * @card Reach of a ramp: how long one line of the grid serves.
 * @formula latest t with a line over [e, t]; sub-stretches from e inherit
 * @source mechanics
 * @units ms → ms
 * @frame the radio’s dial
 * @range whole milliseconds
 * @tolerance as trying every line finds (plan/ramp-path.test.ts)
 */
export function lineReach(task: LineTask, effect: number, servesWith = served(task)): number {
  const { timeMs } = task.corridor
  const last = timeMs.length - 1
  const sidesTo = growingSides(task.corridor, effect)
  const serves = (to: number) => servesWith(effect, to, sidesTo(to))
  if (serves(Infinity)) return Infinity
  // What serves for long serves for less of it, from the same start.
  let [good, bad] = [firstKnotAt(task.corridor, effect) - 1, last]
  while (bad - good > 1) {
    const middle = (good + bad) >> 1
    if (serves(timeMs[middle]!)) good = middle
    else bad = middle
  }
  if (task.corridor.beginsPart[bad]) return Math.ceil(timeMs[bad]!) - 1
  let inside = Math.max(effect - 1, good < 0 ? -Infinity : Math.floor(timeMs[good]!))
  let outside = Math.ceil(timeMs[bad]!)
  while (outside - inside > 1) {
    const middle = Math.floor((inside + outside) / 2)
    if (serves(middle)) inside = middle
    else outside = middle
  }
  return inside
}

/**
 * Starts of rows that are each held as long as a line of the grid serves; null where that leads into a dead end, or past `limit`.
 *
 * @card Ramps by furthest reach: each held as long as it serves.
 * @formula e_{i+1} = reach(e_i), outside quiet spans, a dwell apart
 * @source greedy covering
 * @units ms → ms
 * @frame the radio’s dial
 * @range null in a dead end
 * @tolerance no more rows than gridless lines in h − q/2 − σℓ/4 (predict/ramps.test.ts)
 */
export function furthestLines(task: LineTask, limit: number): number[] | null {
  return furthest(task, limit, served(task))
}

/**
 * How many lines any grid needs at least: furthest reach of lines of any setting and slope, without dwell; Infinity for none.
 *
 * @card Fewest ramps on any grid: a bound from below.
 * @formula furthest reach of lines of any setting and slope
 * @source O’Rourke 1981 (from memory): lines through vertical segments
 * @units ms, Hz → rows
 * @frame the radio’s dial
 * @range slopes to 2⁻³⁰ of the largest
 * @tolerance as an independent count of lines has it (predict/ramps.test.ts)
 */
export function gridlessRows(task: LineTask): number {
  const { corridor, bounds, slopes } = task
  const finest = { stepHzPerS: slopes.stepHzPerS * slopes.most / 2 ** 30, most: slopes.most === 0 ? 0 : 2 ** 30 }
  const starts = furthest({ ...task, dwell: 1 }, Infinity, (effect, to, sides) => roomOver(corridor, effect, to, finest, bounds, sides) >= 0)
  return starts?.length ?? Infinity
}

function furthest(task: LineTask, limit: number, serves: Serves): number[] | null {
  const starts = [task.first]
  for (let effect = task.first; ;) {
    const reached = lineReach(task, effect, serves)
    if (reached === Infinity) return starts
    const next = lastFree(task.quiet, reached)
    if (next < effect + task.dwell || starts.length >= limit) return null
    starts.push(next)
    effect = next
  }
}

/** Instants at which a search lets rows begin, where furthest reach does not settle it. */
const MOST_STARTS = 64
/** Plans this short are searched at every whole instant. */
const SHORT = 400

/** Instants after the first at which a search lets rows begin, in order: every whole one of a short plan, else evenly spread ones and `hints`. */
export function startChoices({ corridor: { timeMs }, first, quiet }: LineTask, hints: readonly number[]): number[] {
  const end = timeMs[timeMs.length - 1]!
  const stride = end - first <= SHORT ? 1 : Math.ceil((end - first) / MOST_STARTS)
  const choices = new Set(hints.slice(1))
  for (let time = first + 1; time < end; time += stride) choices.add(nextFree(quiet, time))
  return [...choices].sort((a, b) => a - b)
}

/**
 * Fewest rows over a choice of starts: reachable sets, row by row. On a grid a later start is not always the worse one, and with
 * a dwell furthest reach runs into dead ends. Every whole instant is a start in a short plan; in a long one, evenly spread instants
 * and those in `hints`.
 *
 * @card Ramps by search: fewest rows over a choice of starts.
 * @formula R_{k+1} = ∪[e + dwell, reach(e)]
 * @source breadth first over reachable starts
 * @units ms → ms
 * @frame the radio’s dial
 * @range every whole instant up to 400 ms, 64 and those of furthest reach beyond
 * @tolerance as few as trying every plan finds (plan/ramp-path.test.ts)
 */
export function searchedLines(task: LineTask, limit: number, hints: readonly number[]): number[] | null {
  const open = startChoices(task, hints).reverse()
  let layer: number[][] = [[task.first]]
  for (let rows = 1; rows <= limit && layer.length > 0; rows++) {
    const next: number[][] = []
    for (const starts of layer) {
      const effect = starts[starts.length - 1]!
      const reached = lineReach(task, effect)
      if (reached === Infinity) return starts
      for (let i = open.length - 1; i >= 0; i--) {
        if (open[i]! < effect + task.dwell || open[i]! > reached) continue
        next.push([...starts, open[i]!])
        open.splice(i, 1)
      }
    }
    layer = next
  }
  return null
}
