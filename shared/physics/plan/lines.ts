import type { Corridor } from './corridor'
import { SLACK_HZ, gridRange } from './corridor'
import type { Sides } from './sides'
import { sidesOver } from './sides'

/** Slopes that a radio can follow: whole multiples of the step from −most to most; `most` 0 for a radio that only steps. */
export interface Slopes { readonly stepHzPerS: number, readonly most: number }

/** Least and greatest slope, Hz/s, that a loop's drift limit leaves over the workable instants of a stretch. */
export type SlopeBounds = (from: number, to: number) => readonly [least: number, most: number]

/** Lines of one slope: at the instant of effect they stand at any grid multiple from `least` to `most`. */
export interface LineChoice { readonly slope: number, readonly least: number, readonly most: number }

/** Slopes looked at on either side of the one that leaves most room. */
const MOST_SLOPES = 40

/**
 * Lines on the radio's grid that stay in the corridor over the workable instants of [effect, to], which begin at their instant of
 * effect. A line of slope s fits exactly when max(low − s·t) ≤ min(high − s·t), both taken at the corridor's hulls; the room
 * between is concave in s, so the slope that leaves most is found by halving, and its neighbours are asked outwards until
 * nothing is left. Where the corridor narrowed by q/2 + σℓ/4 holds a line, one on the grid is found.
 *
 * @card Lines through a corridor: the ramps on a radio’s grid that serve a stretch.
 * @formula max(low − s·t) ≤ k·q ≤ min(high − s·t), s = m·σ
 * @source computational geometry: a line between two convex hulls
 * @units ms, Hz, Hz/s → multiples of q and σ
 * @frame the radio’s dial
 * @range up to 40 slopes either side of the roomiest
 * @tolerance finds one wherever the corridor less q/2 + σℓ/4 holds a line (predict/ramps.test.ts)
 */
export function linesOver(c: Corridor, effect: number, to: number, slopes: Slopes, bounds: SlopeBounds | null, sides = sidesOver(c, effect, to)): LineChoice[] {
  const found: LineChoice[] = []
  seekLines(c, sides, slopeRange(slopes, bounds?.(effect, to)), slopes.stepHzPerS, line => found.push(line) > 2 * MOST_SLOPES)
  return found
}

/**
 * Whether any line of the grid stays in the corridor over [effect, to].
 *
 * @card Ramp over a stretch: whether any line of the grid serves it.
 * @formula some m, k with max(low − m·σ·t) ≤ k·q ≤ min(high − m·σ·t)
 * @source computational geometry: a line between two convex hulls
 * @units ms, Hz, Hz/s → true or false
 * @frame the radio’s dial
 * @range up to 40 slopes either side of the roomiest
 * @tolerance as trying every line finds (plan/ramp-path.test.ts)
 */
export function someLineOver(c: Corridor, effect: number, to: number, slopes: Slopes, bounds: SlopeBounds | null, sides = sidesOver(c, effect, to)): boolean {
  return seekLines(c, sides, slopeRange(slopes, bounds?.(effect, to)), slopes.stepHzPerS, () => true)
}

/** Tells of the lines that fit, from the roomiest slope outwards, until told to stop. */
function seekLines(c: Corridor, sides: Sides, range: readonly [number, number], step: number, found: (line: LineChoice) => boolean): boolean {
  if (range[0] > range[1]) return false
  const best = roomiest(sides, range, step)
  let [up, down] = [best, best - 1]
  let [upMost, downLeast] = [Math.min(range[1], best + MOST_SLOPES), Math.max(range[0], best - MOST_SLOPES)]
  while (up <= upMost || down >= downLeast) {
    const isUp = up <= upMost && (down < downLeast || up - best <= best - down)
    const slope = isUp ? up++ : down--
    const { lowHz, highHz } = roomAt(sides, slope * step)
    if (lowHz > highHz + 2 * SLACK_HZ) {
      // Room is concave in the slope: none further out either.
      if (isUp) upMost = -Infinity
      else downLeast = Infinity
      continue
    }
    const [least, most] = gridRange(c.grid, lowHz, highHz)
    if (least <= most && found({ slope, least, most })) return true
  }
  return false
}

/**
 * Room that the best slope leaves for the setting at the instant of effect, Hz; negative where no line fits, grid or none.
 *
 * @card Room for a ramp: what the best slope leaves between the hulls.
 * @formula max over s of min(high − s·t) − max(low − s·t)
 * @source computational geometry: concave in s
 * @units ms, Hz, Hz/s → Hz
 * @frame the radio’s dial
 * @range slopes within the radio’s and the loop’s
 * @tolerance never asks for more rows than needed (predict/ramps.test.ts)
 */
export function roomOver(c: Corridor, effect: number, to: number, slopes: Slopes, bounds: SlopeBounds | null, sides = sidesOver(c, effect, to)): number {
  const range = slopeRange(slopes, bounds?.(effect, to))
  if (range[0] > range[1]) return -Infinity
  const { lowHz, highHz } = roomAt(sides, roomiest(sides, range, slopes.stepHzPerS) * slopes.stepHzPerS)
  return highHz - lowHz
}

/**
 * The line closest to a curve over [effect, to], by its worst miss: its slope is the roomiest, it stands midway.
 *
 * @card Closest ramp: setting and slope that leave the least worst miss of a curve.
 * @formula s of least range of f − s·t; g midway, to the grid
 * @source Chebyshev’s best line
 * @units ms, Hz, Hz/s → multiples of q and σ
 * @frame the radio’s dial
 * @range any stretch
 * @tolerance 80 Hz at culmination for a second’s hold at 437 MHz and 500 km (plan/cadence.test.ts)
 */
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
  for (let i = 0; i < low.seconds.length; i++) {
    const hz = low.hz[i]! - slope * low.seconds[i]!
    if (hz > lowHz) [lowHz, lowAt] = [hz, low.seconds[i]!]
  }
  for (let i = 0; i < high.seconds.length; i++) {
    const hz = high.hz[i]! - slope * high.seconds[i]!
    if (hz < highHz) [highHz, highAt] = [hz, high.seconds[i]!]
  }
  return { lowHz, highHz, lowAt, highAt }
}
