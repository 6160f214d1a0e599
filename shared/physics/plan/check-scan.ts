import type { UtcMs } from '../types'

/** Where a function of time is asked: evenly, with its turning points and peaks between found by refinement. */
export const SCAN_STEP_MS = 1000

/** Told of every instant of a scan, in order. */
export type ScanVisitor = (atMs: UtcMs, value: number) => void

/**
 * Asks a function at every whole second from `fromMs` and at both ends; where `rate` changes sign between two of these, there as
 * well, to a microsecond; and beside every instant that is highest among its neighbours, at the maximum near it, to 0.1 ms. `rate` and
 * `value` are asked at the same instant one after the other.
 */
export function scan(fromMs: UtcMs, toMs: UtcMs, value: (utcMs: UtcMs) => number, rate?: ((utcMs: UtcMs) => number) | null, visit?: ScanVisitor): void {
  // The last two instants asked; of these `visit` has been told of the first.
  let firstMs = NaN
  let first = NaN
  let secondMs = NaN
  let second = NaN
  const ask = (utcMs: UtcMs): void => {
    const now = value(utcMs)
    if (second >= first && second >= now) {
      const peakMs = peakBetween(firstMs, utcMs, value)
      const peak = value(peakMs)
      if (visit && peakMs < secondMs) visit(peakMs, peak)
      if (visit) visit(secondMs, second)
      if (visit && peakMs >= secondMs) visit(peakMs, peak)
    }
    else if (visit && second === second) visit(secondMs, second)
    firstMs = secondMs
    first = second
    secondMs = utcMs
    second = now
  }
  let beforeMs = fromMs
  let rateBefore = 0
  for (let at = fromMs; ; at = Math.min(at + SCAN_STEP_MS, toMs)) {
    if (rate) {
      const rateNow = rate(at)
      if (rateBefore * rateNow < 0) {
        const isRising = rateBefore > 0
        ask(crossingBetween(beforeMs, at, utcMs => rate(utcMs) > 0 === isRising))
      }
      beforeMs = at
      rateBefore = rateNow
    }
    ask(at)
    if (at >= toMs) break
  }
  if (visit) visit(secondMs, second)
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

const GOLDEN = (Math.sqrt(5) - 1) / 2

function peakBetween(fromMs: UtcMs, toMs: UtcMs, value: (utcMs: UtcMs) => number): UtcMs {
  let a = fromMs
  let b = toMs
  let left = b - GOLDEN * (b - a)
  let right = a + GOLDEN * (b - a)
  let atLeft = value(left)
  let atRight = value(right)
  while (b - a > 0.1) {
    if (atLeft >= atRight) {
      b = right
      right = left
      atRight = atLeft
      left = b - GOLDEN * (b - a)
      atLeft = value(left)
    }
    else {
      a = left
      left = right
      atLeft = atRight
      right = a + GOLDEN * (b - a)
      atRight = value(right)
    }
  }
  return (a + b) / 2
}
