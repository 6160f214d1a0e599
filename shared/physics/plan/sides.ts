import type { Corridor } from './corridor'
import { between, firstKnotAt, insidePiece } from './reach'

interface Hull { readonly seconds: number[], readonly hz: number[] }

/** Upper hull of a corridor's low side and lower hull of its high side, seconds from a row's instant of effect. */
export interface Sides { readonly low: Hull, readonly high: Hull }

/**
 * The sides over the workable instants of [effect, to].
 *
 * @card Hulls of a corridor: upper hull of its low side, lower hull of its high side.
 * @formula points of which no chord passes on the wrong side
 * @source Andrew’s monotone chain, 1979
 * @units ms, Hz → s, Hz
 * @frame the radio’s dial
 * @range rising instants
 * @tolerance as trying every line finds (plan/ramp-path.test.ts)
 */
export const sidesOver = (c: Corridor, effect: number, to: number): Sides => growingSides(c, effect)(to)

/**
 * The sides from one instant of effect on, to be asked at many ends: what was built to an earlier knot is built on.
 *
 * @card Growing hulls: a corridor’s from one start, at many ends.
 * @formula hulls extended knot by knot
 * @source Andrew’s monotone chain, 1979
 * @units ms, Hz → s, Hz
 * @frame the radio’s dial
 * @range rising instants
 * @tolerance as trying every line finds (plan/ramp-path.test.ts)
 */
export function growingSides(c: Corridor, effect: number): (to: number) => Sides {
  const add = (sides: Sides, time: number, lowHz: number, highHz: number) => {
    addToHull(sides.low, (time - effect) / 1000, lowHz, 1)
    addToHull(sides.high, (time - effect) / 1000, highHz, -1)
  }
  const start: Sides = { low: { seconds: [], hz: [] }, high: { seconds: [], hz: [] } }
  const first = firstKnotAt(c, effect)
  if (insidePiece(c, first, effect)) add(start, effect, between(c, c.lowHz, first, effect), between(c, c.highHz, first, effect))
  /** Sides with all knots before `knot`, in rising order of it. */
  const built = [{ knot: first, sides: start }]
  return (to) => {
    const end = to === Infinity ? c.timeMs.length : firstKnotAfter(c, to)
    while (built.length > 1 && built[built.length - 1]!.knot > end) built.pop()
    const last = built[built.length - 1]!
    const sides = last.knot >= end && !insidePiece(c, end, to) ? last.sides : copyOf(last.sides)
    if (last.knot < end) {
      for (let knot = last.knot; knot < end; knot++) add(sides, c.timeMs[knot]!, c.lowHz[knot]!, c.highHz[knot]!)
      built.push({ knot: end, sides: copyOf(sides) })
    }
    if (insidePiece(c, end, to)) add(sides, to, between(c, c.lowHz, end, to), between(c, c.highHz, end, to))
    return sides
  }
}

function firstKnotAfter(c: Corridor, time: number): number {
  const knot = firstKnotAt(c, time)
  return c.timeMs[knot] === time ? knot + 1 : knot
}

const copyOf = ({ low, high }: Sides): Sides => ({
  low: { seconds: low.seconds.slice(), hz: low.hz.slice() }, high: { seconds: high.seconds.slice(), hz: high.hz.slice() },
})

/** Adds a later point to an upper (`side` 1) or lower (−1) hull; Andrew's monotone chain. */
function addToHull({ seconds, hz }: Hull, x: number, y: number, side: 1 | -1): void {
  for (let n = seconds.length; n >= 2; n--) {
    const turn = (seconds[n - 1]! - seconds[n - 2]!) * (y - hz[n - 2]!) - (hz[n - 1]! - hz[n - 2]!) * (x - seconds[n - 2]!)
    if (side * turn < 0) break
    seconds.pop()
    hz.pop()
  }
  seconds.push(x)
  hz.push(y)
}
