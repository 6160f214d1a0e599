import type { Span } from '../../../shared/physics/types'

const STEP_MS = 250

/**
 * Fewest straight lines, off any grid, within `halfHz` of a curve, each as far as it serves, by the slopes between all pairs of
 * samples: a line fits exactly when no pair asks for a steeper rise than another allows. Straightforward, as a reference.
 */
export function leastLines(needed: (utcMs: number) => number, part: Span, halfHz: number): number {
  const times: number[] = []
  for (let at = part.fromMs; at < part.toMs; at += STEP_MS) times.push(at)
  times.push(part.toMs)
  const values = times.map(needed)
  let lines = 1
  for (let first = 0, i = 1, least = -Infinity, most = Infinity; i < times.length; i++) {
    for (let j = first; j < i; j++) {
      const seconds = (times[i]! - times[j]!) / 1000
      least = Math.max(least, (values[i]! - halfHz - values[j]! - halfHz) / seconds)
      most = Math.min(most, (values[i]! + halfHz - values[j]! + halfHz) / seconds)
    }
    if (least <= most) continue
    lines++
    // Both lines serve at a retune, so the next begins at the last sample served.
    first = i - 1
    i = first
    ;[least, most] = [-Infinity, Infinity]
  }
  return lines
}
