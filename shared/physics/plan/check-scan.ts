import type { UtcMs } from '../types'

/** Where a function of time is asked: evenly, with its turning points between found by refinement. */
export const SCAN_STEP_MS = 1000

/** Every whole second from `fromMs`, and both ends. */
export function everySecond(fromMs: UtcMs, toMs: UtcMs): UtcMs[] {
  const instants = [fromMs]
  for (let at = fromMs + SCAN_STEP_MS; at < toMs; at += SCAN_STEP_MS) instants.push(at)
  if (toMs > fromMs) instants.push(toMs)
  return instants
}

/** The instants with, between them, those at which `rate` changes sign, to a microsecond. */
export function withTurns(instants: readonly UtcMs[], rate: (utcMs: UtcMs) => number): UtcMs[] {
  const all: UtcMs[] = []
  let rateBefore = 0
  instants.forEach((at, i) => {
    const rateNow = rate(at)
    const side = rateBefore
    if (i > 0 && side * rateNow < 0) all.push(crossingBetween(instants[i - 1]!, at, utcMs => rate(utcMs) * side > 0))
    all.push(at)
    rateBefore = rateNow
  })
  return all
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

/** The instants with, beside every one that is highest among its neighbours, the maximum near it by golden section, to 0.1 ms. */
export function withPeaks(instants: readonly UtcMs[], value: (utcMs: UtcMs) => number): UtcMs[] {
  const values = instants.map(value)
  const peaks: UtcMs[] = []
  for (let i = 1; i < instants.length - 1; i++) {
    if (values[i]! >= values[i - 1]! && values[i]! >= values[i + 1]!) peaks.push(peakBetween(instants[i - 1]!, instants[i + 1]!, value))
  }
  return peaks.length === 0 ? [...instants] : [...instants, ...peaks].sort((a, b) => a - b)
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
