import type { Span } from '../types'
import { findMaximum, findRoot, type FunctionOfTime } from './refine'

/** Crossings are refined far below the promised millisecond. */
const CROSSING_TOLERANCE_MS = 0.02
const EXTREME_TOLERANCE_MS = 1
/** A hidden extreme is looked for when it could lie this many times the neighbouring differences away. */
const REACH = 3

/** Which sign a function has at an instant. */
export interface Sign { readonly ms: number, readonly above: boolean }

export const signsOf = (f: FunctionOfTime, times: readonly number[]): Sign[] => times.map(ms => ({ ms, above: f(ms) > 0 }))

/**
 * Spans in which a function without kinks is positive between the first and the last of `times`.
 *
 * `times` (rising, even) must be close enough that between three neighbours there is at most one extreme. Every maximum that
 * could rise above zero between samples, and every minimum that could dip below, is bracketed by three samples (two at
 * the ends) and refined, so a span shorter than the step is not missed. `near` is the same function as `exact`, cheap, used for
 * samples and extremes; signs at extremes are `exact`'s. A crossing is found on `near` and corrected by one look at `exact`.
 */
export function positiveSpans(near: FunctionOfTime, exact: FunctionOfTime, times: readonly number[]): Span[] {
  const values = new Float64Array(times.length)
  times.forEach((ms, i) => {
    values[i] = near(ms)
  })
  const last = times.length - 1
  const hiddenAt = (i: number): Sign | null => {
    const value = values[i]!
    const before = values[i - 1] ?? value
    const after = values[i + 1] ?? value
    const hidden = value <= 0 ? 1 : -1
    const isExtreme = hidden * (value - before) >= 0 && hidden * (value - after) >= 0
    if (!isExtreme) return null
    let difference = Math.max(Math.abs(value - before), Math.abs(value - after))
    // Midway to its one neighbour an extreme leaves no difference: the next one shows how steep it is there.
    if (i === 0 && last > 1) difference = Math.max(difference, Math.abs(values[1]! - values[2]!))
    if (i === last && last > 1) difference = Math.max(difference, Math.abs(values[last - 1]! - values[last - 2]!))
    if (Math.abs(value) > REACH * difference) return null
    const ms = findMaximum(t => hidden * near(t), times[i - 1] ?? times[i]!, times[i + 1] ?? times[i]!, EXTREME_TOLERANCE_MS)
    const above = exact(ms) > 0
    return above === value > 0 ? null : { ms, above }
  }
  const signs: Sign[] = []
  // A hidden extreme lies between a sample's neighbours, so before the sample or after it.
  let waiting: Sign[] = []
  for (let i = 0; i < times.length; i++) {
    const own = hiddenAt(i)
    if (own) waiting.push(own)
    if (waiting.length > 0) {
      waiting.sort((a, b) => a.ms - b.ms)
      for (const point of waiting) if (point.ms <= times[i]!) signs.push(point)
      waiting = waiting.filter(point => point.ms > times[i]!)
    }
    signs.push({ ms: times[i]!, above: values[i]! > 0 })
  }
  return spansBetween(exact, signs, near)
}

/**
 * Spans in which `exact` is positive, from its signs at instants (rising) between which it changes sign at most once. With
 * `near`, the same function and cheap, crossings are found on that: only where neither has kinks.
 */
export function spansBetween(exact: FunctionOfTime, signs: readonly Sign[], near?: FunctionOfTime): Span[] {
  const spans: Span[] = []
  let openedMs: number | null = signs[0]?.above ? signs[0].ms : null
  let previous = signs[0]
  for (const sign of signs) {
    if (previous && previous.above !== sign.above) {
      const crossingMs = near ? smoothCrossing(near, exact, previous.ms, sign.ms) : findRoot(exact, previous.ms, sign.ms, CROSSING_TOLERANCE_MS)
      if (openedMs !== null) spans.push({ fromMs: openedMs, toMs: crossingMs })
      openedMs = sign.above ? crossingMs : null
    }
    previous = sign
  }
  if (openedMs !== null && previous) spans.push({ fromMs: openedMs, toMs: previous.ms })
  // What is shorter than a crossing is known to is rounding at an edge.
  return spans.filter(span => span.toMs - span.fromMs > CROSSING_TOLERANCE_MS)
}

const TANGENT_STEP_MS = 1
const SHORTEST_HIDDEN_MS = 2

/**
 * `times` (rising) and every extreme between them at which `f` could have another sign. Between two neighbours `f` must be
 * smooth and have at most one extreme; it lies within the tangents at both, so where these do not pass zero it is not looked for.
 */
export function withExtremes(f: FunctionOfTime, times: readonly number[]): number[] {
  const all = times.slice(0, 1)
  let before = f(times[0]!)
  for (let i = 1; i < times.length; i++) {
    const [fromMs, toMs] = [times[i - 1]!, times[i]!]
    const after = f(toMs)
    const side = before > 0 ? -1 : 1
    if (before > 0 === after > 0 && toMs - fromMs > SHORTEST_HIDDEN_MS) {
      const lengthMs = toMs - fromMs
      const stepMs = Math.min(TANGENT_STEP_MS, lengthMs / 8)
      const rise = side * (f(fromMs + stepMs) - before) / stepMs
      const fall = rise > 0 ? side * (f(toMs - stepMs) - after) / stepMs : 0
      const meetMs = (side * (after - before) + fall * lengthMs) / (rise + fall)
      const isReached = rise > 0 && fall > 0 && side * before + rise * Math.min(lengthMs, Math.max(0, meetMs)) > 0
      if (isReached) all.push(findMaximum(t => side * f(t), fromMs, toMs, EXTREME_TOLERANCE_MS))
    }
    all.push(toMs)
    before = after
  }
  return all
}

const SLOPE_STEP_MS = 50
const MOST_CORRECTION_MS = 5

/**
 * Where the sign changes: found on `near`, then one step of Newton's towards `exact`, which is within millimetres of it.
 * Where that is no small step (a grazing arc, or ends whose sign only `exact` has), searched for on `exact` itself.
 */
function smoothCrossing(near: FunctionOfTime, exact: FunctionOfTime, fromMs: number, toMs: number): number {
  const bySight = findRoot(near, fromMs, toMs, CROSSING_TOLERANCE_MS)
  const [left, right] = [Math.max(fromMs, bySight - SLOPE_STEP_MS), Math.min(toMs, bySight + SLOPE_STEP_MS)]
  const correctionMs = -exact(bySight) * (right - left) / (near(right) - near(left))
  const corrected = bySight + correctionMs
  return Math.abs(correctionMs) <= MOST_CORRECTION_MS && corrected > fromMs && corrected < toMs
    ? corrected
    : findRoot(exact, fromMs, toMs, CROSSING_TOLERANCE_MS)
}

/** Where `f` is largest between the first and the last of `times`, each local maximum bracketed and refined. */
export function highest(f: FunctionOfTime, times: readonly number[]): { readonly ms: number, readonly value: number } {
  const values = times.map(f)
  let best = { ms: times[0]!, value: values[0]! }
  values.forEach((value, i) => {
    if (value < (values[i - 1] ?? -Infinity) || value < (values[i + 1] ?? -Infinity)) return
    const ms = findMaximum(f, times[i - 1] ?? times[i]!, times[i + 1] ?? times[i]!, EXTREME_TOLERANCE_MS)
    const refined = f(ms)
    if (refined > best.value) best = { ms, value: refined }
  })
  return best
}

/** `count` even steps from `fromMs` to `toMs`, both ends in. */
export function evenTimes(fromMs: number, toMs: number, count: number): number[] {
  const times = Array.from({ length: count + 1 }, (_, i) => fromMs + (toMs - fromMs) * i / count)
  times[count] = toMs
  return times
}
