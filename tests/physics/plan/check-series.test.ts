import { describe, expect, it } from 'vitest'
import type { Sampler } from '../../../shared/physics/plan/check-series'
import { seriesOf } from '../../../shared/physics/plan/check-series'

describe('a Chebyshev series on panels', () => {
  // Runge's function, the textbook case that one even-spaced polynomial fails on; value and slope in closed form.
  const runge = (utcMs: number) => 1 / (1 + (utcMs / 1000) ** 2)
  const slopePerS = (utcMs: number) => -2 * (utcMs / 1000) * runge(utcMs) ** 2
  const both: Sampler = (utcMs, into) => {
    into[0] = runge(utcMs)
    into[1] = 3 - utcMs / 1000
  }
  const options = { panelMs: 40_000, nodes: 16, tolerances: [1e-9, 1e-9] }
  const series = seriesOf(both, { fromMs: -50_000, toMs: 50_000, ...options })

  it('halves its panels until Runge\'s function is met everywhere', () => {
    for (let at = -50_000; at <= 50_000; at += 123.4) expect(Math.abs(series.valueAt(at) - runge(at))).toBeLessThan(1e-8)
  })

  it('has its slope, per second', () => {
    for (let at = -49_000; at <= 49_000; at += 123.4) expect(Math.abs(series.rateAt(at) - slopePerS(at))).toBeLessThan(1e-6)
  })

  it('carries other functions on the same panels, wherever it is asked last', () => {
    // A straight line, known everywhere; instants out of order, past panels' edges.
    for (const at of [-50_000, 49_999, -3, 12_345, 50_000, 0]) {
      expect(series.valueAt(at, 1)).toBeCloseTo(3 - at / 1000, 9)
      expect(series.rateAt(at, 1)).toBeCloseTo(-1, 6)
      expect(Math.abs(series.valueAt(at) - runge(at))).toBeLessThan(1e-8)
    }
  })

  it('stands at a point for a span of no length', () => {
    const point = seriesOf(both, { fromMs: 1000, toMs: 1000, ...options })
    expect(point.valueAt(1000)).toBeCloseTo(0.5, 12)
  })
})
