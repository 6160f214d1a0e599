/** Samples of a value and its rate, in order of time. */
export interface Curve { readonly atMs: readonly number[], readonly value: readonly number[], readonly ratePerS: readonly number[] }

/** Index of the last entry at or before an instant; −1 before the first. */
export function lastAtOrBefore(atMs: readonly number[], utcMs: number): number {
  let low = 0
  let high = atMs.length
  while (low < high) {
    const middle = (low + high) >> 1
    if (atMs[middle]! <= utcMs) low = middle + 1
    else high = middle
  }
  return low - 1
}

/** Share of the way from a sample to the next, and the sample's index; held at both ends. */
function placeIn(atMs: readonly number[], utcMs: number): { i: number, share: number } {
  const i = Math.max(0, Math.min(atMs.length - 2, lastAtOrBefore(atMs, utcMs)))
  const length = (atMs[i + 1] ?? atMs[i]!) - atMs[i]!
  return { i, share: length > 0 ? Math.max(0, Math.min(1, (utcMs - atMs[i]!) / length)) : 0 }
}

/**
 * Value between samples by the cubic through two values and two rates (Hermite). Straight lines between samples
 * some seconds apart would show a residual that is not there; the cubic's error is far below a hertz.
 */
export function valueAt({ atMs, value, ratePerS }: Curve, utcMs: number): number {
  const { i, share: u } = placeIn(atMs, utcMs)
  const next = Math.min(i + 1, atMs.length - 1)
  const lengthS = (atMs[next]! - atMs[i]!) / 1000
  const rest = 1 - u
  return rest * rest * (1 + 2 * u) * value[i]! + u * u * (1 + 2 * rest) * value[next]!
    + u * rest * lengthS * (rest * ratePerS[i]! - u * ratePerS[next]!)
}

/** Value between samples on a straight line. */
export function linearAt(atMs: readonly number[], value: readonly number[], utcMs: number): number {
  const { i, share } = placeIn(atMs, utcMs)
  return value[i]! + share * ((value[i + 1] ?? value[i]!) - value[i]!)
}
