const MINUTE_S = 60
const HOUR_S = 60 * MINUTE_S
/** Seconds between marks that read well on a clock. */
const CLOCK_STEPS_S = [1, 2, 5, 10, 15, 30, MINUTE_S, 2 * MINUTE_S, 5 * MINUTE_S, 10 * MINUTE_S, 15 * MINUTE_S, 30 * MINUTE_S, HOUR_S, 2 * HOUR_S, 3 * HOUR_S, 6 * HOUR_S, 12 * HOUR_S, 24 * HOUR_S]

/** Whole clock times within a span, at most `most` of them. */
export function clockTicks(fromMs: number, toMs: number, most: number): number[] {
  const stepMs = (CLOCK_STEPS_S.find(stepS => (toMs - fromMs) / (stepS * 1000) <= most - 1) ?? 24 * HOUR_S) * 1000
  const ticks: number[] = []
  for (let ms = Math.ceil(fromMs / stepMs) * stepMs; ms <= toMs; ms += stepMs) ticks.push(ms)
  return ticks
}

/** Round values within a range: steps of 1, 2 or 5 times a power of ten, about `most` of them at most. */
export function valueTicks(low: number, high: number, most: number): number[] {
  const rough = (high - low) / most
  if (!(rough > 0) || !Number.isFinite(rough)) return []
  const power = 10 ** Math.floor(Math.log10(rough))
  const step = [1, 2, 5, 10].find(factor => factor * power >= rough)! * power
  const ticks: number[] = []
  // Counted in steps, so that zero is zero and not the rest of a sum.
  for (let k = Math.ceil(low / step); k * step <= high; k++) ticks.push(k * step)
  return ticks
}
