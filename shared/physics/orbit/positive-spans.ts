import type { Span } from '../types'
import { findMaximum, findRoot, type FunctionOfTime } from './refine'

/** Crossings are refined far below the promised millisecond. */
const CROSSING_TOLERANCE_MS = 0.02
const EXTREME_TOLERANCE_MS = 1
/** A hidden extreme is looked for when it could lie this many times the neighbouring differences away. */
const REACH = 3

/**
 * Spans in which `exact` is positive between the first and the last of `times`.
 *
 * `times` (rising) must be close enough that between three neighbours there is at most one extreme. Every maximum that
 * could rise above zero between samples, and every minimum that could dip below, is bracketed by three samples (two at
 * the ends) and refined, so a span shorter than the step is not missed. `near` is the same function, cheap, used for
 * samples and extremes; signs at extremes and crossings are `exact`'s. Of functions without kinks (`isSmooth`) a crossing is
 * found on `near` and corrected by one look at `exact`.
 */
export function positiveSpans(near: FunctionOfTime, exact: FunctionOfTime, times: readonly number[], { isSmooth = false } = {}): Span[] {
  const values = new Float64Array(times.length)
  times.forEach((ms, i) => {
    values[i] = near(ms)
  })
  const spans: Span[] = []
  let openedMs: number | null = null
  let previous: { ms: number, above: boolean } | null = null
  const pass = (ms: number, above: boolean): void => {
    if (previous === null) {
      if (above) openedMs = ms
    }
    else if (previous.above !== above) {
      const crossingMs = isSmooth ? smoothCrossing(near, exact, previous.ms, ms) : findRoot(exact, previous.ms, ms, CROSSING_TOLERANCE_MS)
      if (above) openedMs = crossingMs
      else if (openedMs !== null) {
        spans.push({ fromMs: openedMs, toMs: crossingMs })
        openedMs = null
      }
    }
    if (previous?.above === above) previous.ms = ms
    else previous = { ms, above }
  }

  const hiddenAt = (i: number): { ms: number, above: boolean } | null => {
    const value = values[i]!
    const before = values[i - 1] ?? value
    const after = values[i + 1] ?? value
    const hidden = value <= 0 ? 1 : -1
    const isExtreme = hidden * (value - before) >= 0 && hidden * (value - after) >= 0
    if (!isExtreme || Math.abs(value) > REACH * Math.max(Math.abs(value - before), Math.abs(value - after))) return null
    const ms = findMaximum(t => hidden * near(t), times[i - 1] ?? times[i]!, times[i + 1] ?? times[i]!, EXTREME_TOLERANCE_MS)
    const above = exact(ms) > 0
    return above === value > 0 ? null : { ms, above }
  }
  // A hidden extreme lies between a sample's neighbours, so before the sample or after it.
  let waiting: { ms: number, above: boolean }[] = []
  for (let i = 0; i < times.length; i++) {
    const own = hiddenAt(i)
    if (own) waiting.push(own)
    if (waiting.length > 0) {
      waiting.sort((a, b) => a.ms - b.ms)
      for (const point of waiting) if (point.ms <= times[i]!) pass(point.ms, point.above)
      waiting = waiting.filter(point => point.ms > times[i]!)
    }
    pass(times[i]!, values[i]! > 0)
  }
  if (openedMs !== null) spans.push({ fromMs: openedMs, toMs: times[times.length - 1]! })
  // What is shorter than a crossing is known to is rounding at an edge.
  return spans.filter(span => span.toMs - span.fromMs > CROSSING_TOLERANCE_MS)
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
