import type { Corridor } from './corridor'
import { gridRange, isOnGrid } from './corridor'
import type { QuietStretches } from './quiet'
import { lastFree } from './quiet'

/**
 * How far one constant setting serves. A constant fits [a, b] exactly when a grid point lies between the greatest low side and
 * the least high side of the corridor over the workable parts in [a, b]; sub-intervals inherit, so going as far as possible
 * with each setting needs the fewest.
 */

/**
 * Latest whole instant to which one setting serves from `from`; Infinity when to the end; below `from` when none serves there.
 * `fromKnot` is the first knot at or after `from`.
 */
export function reachFrom(c: Corridor, from: number, fromKnot = firstKnotAt(c, from)): number {
  const { timeMs, lowHz, highHz, grid } = c
  let knot = fromKnot
  let low = -Infinity
  let high = Infinity
  if (insidePiece(c, knot, from)) {
    low = between(c, lowHz, knot, from)
    high = between(c, highHz, knot, from)
    if (!isOnGrid(grid, low, high)) return from - 1
  }
  // Where no band ends the grid, what is as wide as its step holds one of its points.
  const sure = grid.least === -Infinity && grid.most === Infinity ? grid.stepHz : Infinity
  for (; knot < timeMs.length; knot++) {
    let lower = lowHz[knot]!
    let higher = highHz[knot]!
    if (lower < low) lower = low
    if (higher > high) higher = high
    if (!(higher - lower >= sure) && !isOnGrid(grid, lower, higher)) return lastBefore(c, knot, from, low, high)
    low = lower
    high = higher
  }
  return Infinity
}

/** Lowest and highest grid multiple that serve over all of [from, to]. */
export function settingsOver(c: Corridor, from: number, to: number): readonly [number, number] {
  const { timeMs, lowHz, highHz } = c
  let low = -Infinity
  let high = Infinity
  let knot = firstKnotAt(c, from)
  if (insidePiece(c, knot, from)) {
    low = between(c, lowHz, knot, from)
    high = between(c, highHz, knot, from)
  }
  for (; knot < timeMs.length && timeMs[knot]! <= to; knot++) {
    if (lowHz[knot]! > low) low = lowHz[knot]!
    if (highHz[knot]! < high) high = highHz[knot]!
  }
  if (insidePiece(c, knot, to)) {
    low = Math.max(low, between(c, lowHz, knot, to))
    high = Math.min(high, between(c, highHz, knot, to))
  }
  return gridRange(c.grid, low, high)
}

/**
 * Starts of the fewest settings that serve from `first` to the end, each held as long as it serves and a change may take effect;
 * null where none does, or past `limit`.
 */
export function furthestReach(c: Corridor, first: number, limit: number, quiet: QuietStretches = []): number[] | null {
  const starts = [first]
  let knot = firstKnotAt(c, first)
  for (let from = first; ;) {
    const reached = reachFrom(c, from, knot)
    if (reached === Infinity) return starts
    const to = lastFree(quiet, reached)
    if (to <= from || starts.length >= limit) return null
    starts.push(to)
    from = to
    while (c.timeMs[knot]! < from) knot++
  }
}

/** True where `time` lies in or on the edge of a workable part. */
export function isWorkable(c: Corridor, time: number): boolean {
  const knot = firstKnotAt(c, time)
  return c.timeMs[knot] === time || insidePiece(c, knot, time)
}

/** The setting that served up to the knot before fails at `knot`: the last whole instant before it fails. */
function lastBefore(c: Corridor, knot: number, from: number, low: number, high: number): number {
  const { timeMs, lowHz, highHz, grid } = c
  let fails = Math.ceil(timeMs[knot]!)
  if (c.beginsPart[knot]) return fails - 1
  let serves = Math.max(from, Math.floor(timeMs[knot - 1]!))
  // Where one side closes in on the last grid point, the instant is known to a few; the rest is halved.
  const { stepHz } = grid
  const guess = highHz[knot]! < high
    ? whereMeets(c, highHz, knot, Math.ceil(Math.max(low, lowHz[knot]!) / stepHz) * stepHz)
    : whereMeets(c, lowHz, knot, Math.floor(high / stepHz) * stepHz)
  for (let time = Math.floor(guess), tries = 0; fails - serves > 1; time = tries < 2 ? time + 1 : Math.floor((serves + fails) / 2)) {
    tries++
    if (!(time > serves && time < fails)) continue
    if (isOnGrid(grid, Math.max(low, between(c, lowHz, knot, time)), Math.min(high, between(c, highHz, knot, time)))) serves = time
    else fails = time
  }
  return serves
}

/** Where a side meets a frequency on the piece that ends at `knot`, or beyond it; not a number where it never does. */
function whereMeets({ timeMs }: Corridor, side: Float64Array, knot: number, hz: number): number {
  return timeMs[knot - 1]! + (timeMs[knot]! - timeMs[knot - 1]!) * (hz - side[knot - 1]!) / (side[knot]! - side[knot - 1]!)
}

/** Index of the first knot at or after `time`. */
export function firstKnotAt(c: Corridor, time: number): number {
  let before = -1
  let after = c.timeMs.length
  while (after - before > 1) {
    const middle = (before + after) >> 1
    if (c.timeMs[middle]! < time) before = middle
    else after = middle
  }
  return after
}

export function insidePiece(c: Corridor, knot: number, time: number): boolean {
  return knot > 0 && knot < c.timeMs.length && !c.beginsPart[knot]! && c.timeMs[knot]! > time && c.timeMs[knot - 1]! <= time
}

/** A side of the corridor on the piece that ends at `knot`. */
export function between(c: Corridor, side: Float64Array, knot: number, time: number): number {
  const start = c.timeMs[knot - 1]!
  return side[knot - 1]! + (side[knot]! - side[knot - 1]!) * (time - start) / (c.timeMs[knot]! - start)
}
