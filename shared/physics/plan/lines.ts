import type { Corridor } from './corridor'
import { SLACK_HZ, gridRange } from './corridor'
import { between, firstKnotAt, insidePiece } from './reach'

/** Slopes that a radio can follow: whole multiples of the step from −most to most; `most` 0 for a radio that only steps. */
export interface Slopes { readonly stepHzPerS: number, readonly most: number }

/** Least and greatest slope, Hz/s, that a loop's drift limit leaves over the workable instants of a stretch. */
export type SlopeBounds = (from: number, to: number) => readonly [least: number, most: number]

/** Lines of one slope: at the instant of effect they stand at any grid multiple from `least` to `most`. */
export interface LineChoice { readonly slope: number, readonly least: number, readonly most: number }

/** Slopes looked at on either side of the one that leaves most room. */
const MOST_SLOPES = 40

interface Sides { readonly low: readonly Point[], readonly high: readonly Point[] }
type Point = readonly [seconds: number, hz: number]

/**
 * Lines on the radio's grid that stay in the corridor over the workable instants of [effect, to], which begin at their instant of
 * effect. A line of slope s fits exactly when max(low − s·t) ≤ min(high − s·t), both taken at the corridor's hulls; the room
 * between is concave in s, so the slope that leaves most is found by halving, and its neighbours are asked outwards until
 * nothing is left. Where the corridor narrowed by q/2 + σℓ/4 holds a line, one on the grid is found.
 */
export function linesOver(c: Corridor, effect: number, to: number, slopes: Slopes, bounds: SlopeBounds | null): LineChoice[] {
  const sides = sidesOver(c, effect, to)
  const range = slopeRange(slopes, bounds?.(effect, to))
  if (range[0] > range[1]) return []
  const best = roomiest(sides, range, slopes.stepHzPerS)
  const found: LineChoice[] = []
  const ask = (slope: number): boolean => {
    const { lowHz, highHz } = roomAt(sides, slope * slopes.stepHzPerS)
    if (lowHz > highHz + 2 * SLACK_HZ) return false
    const [least, most] = gridRange(c.grid, lowHz, highHz)
    if (least <= most) found.push({ slope, least, most })
    return true
  }
  for (let slope = best; slope <= Math.min(range[1], best + MOST_SLOPES) && ask(slope);) slope++
  for (let slope = best - 1; slope >= Math.max(range[0], best - MOST_SLOPES) && ask(slope);) slope--
  return found
}

/** Room that the best slope leaves for the setting at the instant of effect, Hz; negative where no line fits, grid or none. */
export function roomOver(c: Corridor, effect: number, to: number, slopes: Slopes, bounds: SlopeBounds | null): number {
  const range = slopeRange(slopes, bounds?.(effect, to))
  if (range[0] > range[1]) return -Infinity
  const sides = sidesOver(c, effect, to)
  const { lowHz, highHz } = roomAt(sides, roomiest(sides, range, slopes.stepHzPerS) * slopes.stepHzPerS)
  return highHz - lowHz
}

/** The line closest to a curve over [effect, to], by its worst miss: its slope is the roomiest, it stands midway. */
export function closestLine(c: Corridor, effect: number, to: number, slopes: Slopes, bounds: SlopeBounds | null): { slope: number, setting: number } {
  const allowed = slopeRange(slopes, bounds?.(effect, to))
  const range = allowed[0] > allowed[1] ? slopeRange(slopes, undefined) : allowed
  const sides = sidesOver(c, effect, to)
  const best = roomiest(sides, range, slopes.stepHzPerS)
  let closest = { slope: 0, setting: 0, miss: Infinity }
  for (let slope = Math.max(range[0], best - 2); slope <= Math.min(range[1], best + 2); slope++) {
    const { lowHz, highHz } = roomAt(sides, slope * slopes.stepHzPerS)
    // On a curve low and high are one, so `lowHz` is its highest, `highHz` its lowest point after the slope is taken off.
    const middle = (lowHz + highHz) / 2 / c.grid.stepHz
    for (const near of [Math.floor(middle), Math.ceil(middle)]) {
      const setting = Math.min(Math.max(near, c.grid.least), c.grid.most)
      const miss = Math.max(lowHz - setting * c.grid.stepHz, setting * c.grid.stepHz - highHz)
      if (miss < closest.miss) closest = { slope, setting, miss }
    }
  }
  return { slope: closest.slope, setting: closest.setting }
}

/** Slopes within what the radio follows and the loop bears, as multiples. */
function slopeRange({ stepHzPerS, most }: Slopes, bounds: readonly [number, number] | undefined): [least: number, most: number] {
  if (!bounds) return [-most, most]
  return [Math.max(-most, Math.ceil(bounds[0] / stepHzPerS - 1e-9)), Math.min(most, Math.floor(bounds[1] / stepHzPerS + 1e-9))]
}

function roomiest(sides: Sides, [least, most]: readonly [number, number], step: number): number {
  let [low, high] = [least, most]
  while (high - low > 1) {
    const middle = Math.floor((low + high) / 2)
    if (growsAt(sides, middle * step)) low = middle
    else high = middle
  }
  const room = (slope: number) => {
    const { lowHz, highHz } = roomAt(sides, slope * step)
    return highHz - lowHz
  }
  return room(high) > room(low) ? high : low
}

/** Where the room grows with the slope: the high side binds earlier than the low side. */
function growsAt(sides: Sides, slope: number): boolean {
  const { lowAt, highAt } = roomAt(sides, slope)
  return highAt < lowAt
}

function roomAt({ low, high }: Sides, slope: number): { lowHz: number, highHz: number, lowAt: number, highAt: number } {
  let [lowHz, highHz, lowAt, highAt] = [-Infinity, Infinity, 0, 0]
  for (const [x, y] of low) {
    if (y - slope * x > lowHz) [lowHz, lowAt] = [y - slope * x, x]
  }
  for (const [x, y] of high) {
    if (y - slope * x < highHz) [highHz, highAt] = [y - slope * x, x]
  }
  return { lowHz, highHz, lowAt, highAt }
}

/** Upper hull of the low side and lower hull of the high side over the workable instants of [effect, to]. */
function sidesOver(c: Corridor, effect: number, to: number): Sides {
  const low: Point[] = []
  const high: Point[] = []
  const include = (time: number, lowHz: number, highHz: number) => {
    const x = (time - effect) / 1000
    addToHull(low, [x, lowHz], 1)
    addToHull(high, [x, highHz], -1)
  }
  let knot = firstKnotAt(c, effect)
  if (insidePiece(c, knot, effect)) include(effect, between(c, c.lowHz, knot, effect), between(c, c.highHz, knot, effect))
  for (; knot < c.timeMs.length && c.timeMs[knot]! <= to; knot++) include(c.timeMs[knot]!, c.lowHz[knot]!, c.highHz[knot]!)
  if (insidePiece(c, knot, to)) include(to, between(c, c.lowHz, knot, to), between(c, c.highHz, knot, to))
  return { low, high }
}

/** Adds a later point to an upper (`side` 1) or lower (−1) hull; Andrew's monotone chain. */
function addToHull(hull: Point[], point: Point, side: 1 | -1): void {
  while (hull.length >= 2) {
    const [a, b] = [hull[hull.length - 2]!, hull[hull.length - 1]!]
    if (side * ((b[0] - a[0]) * (point[1] - a[1]) - (b[1] - a[1]) * (point[0] - a[0])) < 0) break
    hull.pop()
  }
  hull.push(point)
}
