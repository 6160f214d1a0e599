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
 * samples and extremes; signs at extremes and crossings are `exact`'s.
 */
export function positiveSpans(near: FunctionOfTime, exact: FunctionOfTime, times: readonly number[]): Span[] {
  const values = times.map(near)
  const points = times.map((ms, i) => ({ ms, above: values[i]! > 0 }))

  values.forEach((value, i) => {
    const before = values[i - 1] ?? value
    const after = values[i + 1] ?? value
    const hidden = value <= 0 ? 1 : -1
    const isExtreme = hidden * (value - before) >= 0 && hidden * (value - after) >= 0
    const reach = REACH * Math.max(Math.abs(value - before), Math.abs(value - after))
    if (!isExtreme || Math.abs(value) > reach) return
    const ms = findMaximum(t => hidden * near(t), times[i - 1] ?? times[i]!, times[i + 1] ?? times[i]!, EXTREME_TOLERANCE_MS)
    const above = exact(ms) > 0
    if (above !== value > 0) points.push({ ms, above })
  })
  points.sort((a, b) => a.ms - b.ms)

  const spans: Span[] = []
  let openedMs: number | null = null
  points.forEach((point, i) => {
    const previous = points[i - 1]
    if (previous && previous.above !== point.above) {
      const crossingMs = findRoot(exact, previous.ms, point.ms, CROSSING_TOLERANCE_MS)
      if (point.above) openedMs = crossingMs
      else if (openedMs !== null) {
        spans.push({ fromMs: openedMs, toMs: crossingMs })
        openedMs = null
      }
    }
    else if (!previous && point.above) openedMs = point.ms
  })
  const last = points[points.length - 1]
  if (last && openedMs !== null) spans.push({ fromMs: openedMs, toMs: last.ms })
  return spans
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
