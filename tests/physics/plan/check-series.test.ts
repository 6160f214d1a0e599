import { describe, expect, it } from 'vitest'
import { seriesOf } from '../../../shared/physics/plan/check-series'

describe('a Chebyshev series on panels', () => {
  // Runge's function, the textbook case that one even-spaced polynomial fails on; value and slope in closed form.
  const runge = (utcMs: number) => 1 / (1 + (utcMs / 1000) ** 2)
  const slopePerS = (utcMs: number) => -2 * (utcMs / 1000) * runge(utcMs) ** 2
  const series = seriesOf(runge, { fromMs: -50_000, toMs: 50_000, panelMs: 40_000, nodes: 16, tolerance: 1e-9 })

  it('halves its panels until Runge\'s function is met everywhere', () => {
    for (let at = -50_000; at <= 50_000; at += 123.4) expect(Math.abs(series.valueAt(at) - runge(at))).toBeLessThan(1e-8)
  })

  it('has its slope, per second', () => {
    for (let at = -49_000; at <= 49_000; at += 123.4) expect(Math.abs(series.rateAt(at) - slopePerS(at))).toBeLessThan(1e-6)
  })

  it('stands at a point for a span of no length', () => {
    const point = seriesOf(runge, { fromMs: 1000, toMs: 1000, panelMs: 40_000, nodes: 16, tolerance: 1e-9 })
    expect(point.valueAt(1000)).toBeCloseTo(0.5, 12)
  })
})
