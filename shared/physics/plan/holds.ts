import type { Corridor } from './corridor'
import { SLACK_HZ } from './corridor'
import { between } from './reach'

/**
 * A hold: one grid point and one longest stretch of whole instants over which it serves, stretches between workable parts
 * included. Where a least dwell or a jump limit binds, plans are paths from hold to hold; within a hold only the earliest start
 * matters, since leaving is possible from then plus dwell until the hold's end.
 */
export interface Holds {
  /** Grid points in multiples of the step, in rising order; hold `i` stands at `setting[i]`. */
  readonly setting: Float64Array
  readonly from: Float64Array
  readonly to: Float64Array
  /** First and last whole instant of the whole plan. */
  readonly first: number
  readonly last: number
  /** Stretches strictly between workable parts, whole instants. */
  readonly gaps: readonly (readonly [number, number])[]
}

/** All holds of a corridor on every `stride`-th grid point. */
export function holdsOf(c: Corridor, stride: number): Holds {
  const first = Math.floor(c.timeMs[0]!)
  const last = Math.ceil(c.timeMs[c.timeMs.length - 1]!)
  const q = c.grid.stepHz * stride
  // Reduced, not spread: a long pass has more knots than an argument list bears.
  const least = Math.max(Math.ceil(c.grid.least / stride), Math.floor(c.lowHz.reduce((a, b) => Math.min(a, b)) / q))
  const most = Math.min(Math.floor(c.grid.most / stride), Math.ceil(c.highHz.reduce((a, b) => Math.max(a, b)) / q))
  const count = Math.max(0, most - least + 1)
  const open = new Array<number>(count).fill(Number.NaN)
  const found: { readonly point: number[], readonly from: number[], readonly to: number[] } = { point: [], from: [], to: [] }
  const gaps: [number, number][] = []

  const serves = (knot: number, n: number) => c.lowHz[knot]! - SLACK_HZ <= n * q && c.highHz[knot]! + SLACK_HZ >= n * q
  const close = (i: number, to: number) => {
    if (to >= open[i]!) {
      found.point.push(i)
      found.from.push(open[i]!)
      found.to.push(to)
    }
    open[i] = Number.NaN
  }

  for (let knot = 0; knot < c.timeMs.length; knot++) {
    const time = c.timeMs[knot]!
    if (c.beginsPart[knot]) {
      const from = knot === 0 ? first : Math.floor(c.timeMs[knot - 1]!) + 1
      const to = Math.ceil(time) - 1
      if (knot > 0 && from <= to) gaps.push([from, to])
      for (let i = 0; i < count; i++) {
        const isOpen = !Number.isNaN(open[i]!)
        if (serves(knot, least + i)) open[i] = isOpen ? open[i]! : from
        else if (isOpen) close(i, to)
      }
      continue
    }
    const before = knot - 1
    const inner = [Math.max(c.lowHz[before]!, c.lowHz[knot]!), Math.min(c.highHz[before]!, c.highHz[knot]!)] as const
    const outerLow = Math.ceil((Math.min(c.lowHz[before]!, c.lowHz[knot]!) - SLACK_HZ) / q)
    const outerHigh = Math.floor((Math.max(c.highHz[before]!, c.highHz[knot]!) + SLACK_HZ) / q)
    for (let n = Math.max(least, outerLow); n <= Math.min(most, outerHigh); n++) {
      if (n * q >= inner[0] && n * q <= inner[1]) {
        // Serves at both ends and so all along: on to the first that does not.
        n = Math.max(n, Math.min(most, Math.floor(inner[1] / q)))
        continue
      }
      const stretch = servedWithin(c, knot, n * q)
      const i = n - least
      if (stretch !== null && Number.isNaN(open[i]!)) open[i] = stretch[0]
      if (!Number.isNaN(open[i]!) && !serves(knot, n)) close(i, stretch === null ? Math.floor(c.timeMs[before]!) : stretch[1])
    }
  }
  for (let i = 0; i < count; i++) if (!Number.isNaN(open[i]!)) close(i, last)
  // By setting; holds of one setting are found in order of time already.
  const places = new Int32Array(count + 1)
  for (const i of found.point) places[i + 1] = places[i + 1]! + 1
  for (let i = 0; i < count; i++) places[i + 1] = places[i + 1]! + places[i]!
  const total = found.point.length
  const holds = { setting: new Float64Array(total), from: new Float64Array(total), to: new Float64Array(total), first, last, gaps }
  for (let n = 0; n < total; n++) {
    const i = found.point[n]!
    const place = places[i]!
    places[i] = place + 1
    holds.setting[place] = (least + i) * stride
    holds.from[place] = found.from[n]!
    holds.to[place] = found.to[n]!
  }
  return holds
}

/** The same holds with time running backwards. */
export function mirroredHolds(h: Holds): Holds {
  return {
    setting: h.setting, from: h.to.map(t => -t), to: h.from.map(t => -t), first: -h.last, last: -h.first,
    gaps: h.gaps.map(([a, b]) => [-b, -a] as const).reverse(),
  }
}

/**
 * First and last whole instant at which a frequency lies in the corridor on the piece that ends at `knot`; null for none. Where the
 * frequency serves at the piece's end, its first instant may lie beyond, the last at the end.
 */
function servedWithin(c: Corridor, knot: number, frequency: number): [first: number, last: number] | null {
  const start = c.timeMs[knot - 1]!
  const end = c.timeMs[knot]!
  let [enter, leave] = [start, end]
  // Each side is kept where a straight line from `a` to `b` is not positive.
  const keep = (a: number, b: number) => {
    if (a > 0) enter = b > 0 ? Infinity : Math.max(enter, start + (end - start) * a / (a - b))
    else if (b > 0) leave = Math.min(leave, start + (end - start) * a / (a - b))
  }
  keep(c.lowHz[knot - 1]! - SLACK_HZ - frequency, c.lowHz[knot]! - SLACK_HZ - frequency)
  keep(frequency - c.highHz[knot - 1]! - SLACK_HZ, frequency - c.highHz[knot]! - SLACK_HZ)
  if (enter > leave) return null
  // The meeting points are rounded; the instants beside them are asked directly, as furthest reach asks them.
  const serves = (time: number) =>
    between(c, c.lowHz, knot, time) - SLACK_HZ <= frequency && between(c, c.highHz, knot, time) + SLACK_HZ >= frequency
  let first = Math.ceil(enter)
  let last = Math.floor(leave)
  if (first - 1 >= start && serves(first - 1)) first--
  else if (first <= end && !serves(first)) first++
  if (last + 1 <= end && serves(last + 1)) last++
  else if (last >= start && !serves(last)) last--
  return first <= last || leave === end ? [first, last] : null
}
