import type { UtcMs } from '../types'

/** Where a function of time is asked: evenly, with its turning points and peaks between found by refinement. */
export const SCAN_STEP_MS = 1000

/** Instants in order, and what a function comes to at each. */
export interface Scan { readonly atMs: readonly UtcMs[], readonly value: readonly number[] }

/**
 * A function at every whole second from `fromMs` and at both ends; where `rate` changes sign between two of these, there as well, to
 * a microsecond; and beside every instant that is highest among its neighbours, at the maximum near it, to 0.1 ms. `rate` and
 * `value` are asked at the same instant one after the other.
 */
export function scanOf(fromMs: UtcMs, toMs: UtcMs, value: (utcMs: UtcMs) => number, rate?: (utcMs: UtcMs) => number): Scan {
  const atMs: UtcMs[] = []
  const values: number[] = []
  const ask = (utcMs: UtcMs): void => {
    atMs.push(utcMs)
    values.push(value(utcMs))
  }
  let beforeMs = fromMs
  let rateBefore = 0
  const step = (utcMs: UtcMs): void => {
    if (rate) {
      const rateNow = rate(utcMs)
      if (rateBefore * rateNow < 0) {
        const isRising = rateBefore > 0
        ask(crossingBetween(beforeMs, utcMs, at => rate(at) > 0 === isRising))
      }
      beforeMs = utcMs
      rateBefore = rateNow
    }
    ask(utcMs)
  }
  step(fromMs)
  for (let at = fromMs + SCAN_STEP_MS; at < toMs; at += SCAN_STEP_MS) step(at)
  if (toMs > fromMs) step(toMs)
  return withPeaks({ atMs, value: values }, value)
}

/** Last instant of [fromMs, toMs] that satisfies `holds`, which the first does and the last does not; to a microsecond. */
export function crossingBetween(fromMs: UtcMs, toMs: UtcMs, holds: (utcMs: UtcMs) => boolean): UtcMs {
  let [inside, outside] = [fromMs, toMs]
  while (outside - inside > 1e-3) {
    const middle = (inside + outside) / 2
    if (holds(middle)) inside = middle
    else outside = middle
  }
  return inside
}

/** The scan with the peaks that lie between its instants, in their places. */
function withPeaks(scan: Scan, value: (utcMs: UtcMs) => number): Scan {
  const { atMs, value: values } = scan
  let peaks: { atMs: UtcMs[], value: number[] } | null = null
  let kept = 0
  for (let i = 1; i < atMs.length - 1; i++) {
    if (!(values[i]! >= values[i - 1]! && values[i]! >= values[i + 1]!)) continue
    const at = peakBetween(atMs[i - 1]!, atMs[i + 1]!, value)
    peaks ??= { atMs: [], value: [] }
    const end = at < atMs[i]! ? i : i + 1
    for (; kept < end; kept++) {
      peaks.atMs.push(atMs[kept]!)
      peaks.value.push(values[kept]!)
    }
    peaks.atMs.push(at)
    peaks.value.push(value(at))
  }
  if (!peaks) return scan
  for (; kept < atMs.length; kept++) {
    peaks.atMs.push(atMs[kept]!)
    peaks.value.push(values[kept]!)
  }
  return peaks
}

const GOLDEN = (Math.sqrt(5) - 1) / 2

function peakBetween(fromMs: UtcMs, toMs: UtcMs, value: (utcMs: UtcMs) => number): UtcMs {
  let [a, b] = [fromMs, toMs]
  let [left, right] = [b - GOLDEN * (b - a), a + GOLDEN * (b - a)]
  let [atLeft, atRight] = [value(left), value(right)]
  while (b - a > 0.1) {
    if (atLeft >= atRight) {
      [b, right, atRight] = [right, left, atLeft]
      left = b - GOLDEN * (b - a)
      atLeft = value(left)
    }
    else {
      [a, left, atLeft] = [left, right, atRight]
      right = a + GOLDEN * (b - a)
      atRight = value(right)
    }
  }
  return (a + b) / 2
}
