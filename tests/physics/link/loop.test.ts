import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { TrackingLoop } from '../../../shared/physics/link/loop'
import { loopDriftLimitHzPerS, loopNaturalRadPerS, loopPhaseErrorRad } from '../../../shared/physics/link/loop'

const DEG = 180 / Math.PI

describe('a second-order loop', () => {
  // Source: loop theory, 2π·ḟ/ω_n² with ω_n = 2·B_L/(ζ + 1/(4ζ)), worked out: ω_n 37.71 and 94.29 rad/s.
  it.each([[20, 40.3, 0.05], [50, 6.45, 0.005]])('of %d Hz, damping 0.707, lags by %d° behind 159.3 Hz/s', (noiseBandwidthHz, degrees, tolerance) => {
    expect(Math.abs(loopPhaseErrorRad({ noiseBandwidthHz, damping: 0.707 }, 159.3) * DEG - degrees)).toBeLessThan(tolerance)
  })

  it.each([[20, 40.3188], [50, 6.4510]])('of %d Hz follows 159.3 Hz/s and no more where %d° are permitted', (noiseBandwidthHz, degrees) => {
    expect(loopDriftLimitHzPerS({ noiseBandwidthHz, damping: 0.707 }, degrees / DEG)).toBeCloseTo(159.3, 1)
  })

  it.each([0.5, 0.707, 1, 2])('with damping %d has the noise bandwidth that it states', (damping) => {
    // Source: definition, B_L = ∫₀^∞ |H(2πif)|² df, H(s) = (2ζω_n·s + ω_n²)/(s² + 2ζω_n·s + ω_n²); f = ω_n·tan u/2π, Simpson's rule.
    const natural = loopNaturalRadPerS({ noiseBandwidthHz: 20, damping })
    const power = (x: number): number => (1 + (2 * damping * x) ** 2) / ((1 - x * x) ** 2 + (2 * damping * x) ** 2)
    const steps = 20_000
    let sum = 0
    for (let i = 0; i <= steps; i++) {
      const u = Math.PI / 2 * i / steps
      // At a right angle x² runs to infinity and takes |H|² to 4ζ²/x²; (1 + x²)·|H|² to 4ζ².
      const value = i === steps ? (2 * damping) ** 2 : power(Math.tan(u)) / Math.cos(u) ** 2
      sum += value * (i === 0 || i === steps ? 1 : i % 2 ? 4 : 2)
    }
    const bandwidthHz = natural / (2 * Math.PI) * sum * (Math.PI / 2 / steps) / 3
    expect(Math.abs(bandwidthHz / 20 - 1)).toBeLessThan(1e-6)
  })

  it('that is followed in time comes to rest at the phase error it is said to have', () => {
    // Source: the loop's own differential equation, θ″ = φ″ − 2ζω_n·θ′ − ω_n²·θ, in steps of 10 µs for half a second.
    const loop = { noiseBandwidthHz: 50, damping: 0.707 }
    const natural = 2 * 50 / (0.707 + 1 / (4 * 0.707))
    let [error, rate] = [0, 0]
    for (let i = 0; i < 50_000; i++) {
      rate += 1e-5 * (2 * Math.PI * 159.3 - 2 * 0.707 * natural * rate - natural ** 2 * error)
      error += 1e-5 * rate
    }
    expect(Math.abs(loopPhaseErrorRad(loop, 159.3) / error - 1)).toBeLessThan(1e-3)
  })

  it('lags by the permitted error at its drift limit, and by less below it', () => {
    const loops: fc.Arbitrary<TrackingLoop> = fc.record({ noiseBandwidthHz: fc.integer({ min: 1, max: 5000 }), damping: fc.integer({ min: 3, max: 30 }).map(tenths => tenths / 10) })
    fc.assert(fc.property(loops, fc.integer({ min: 1, max: 89 }), (loop, degrees) => {
      const limit = loopDriftLimitHzPerS(loop, degrees / DEG)
      expect(Math.abs(loopPhaseErrorRad(loop, limit) * DEG / degrees - 1)).toBeLessThan(1e-12)
      expect(loopPhaseErrorRad(loop, limit / 2)).toBeLessThan(degrees / DEG)
    }), { seed: 7 })
  })

  it('refuses figures that no loop has, by name', () => {
    expect(() => loopNaturalRadPerS({ noiseBandwidthHz: 0, damping: 0.7 })).toThrow(/noiseBandwidthHz/)
    expect(() => loopNaturalRadPerS({ noiseBandwidthHz: 20, damping: -1 })).toThrow(/damping/)
    expect(() => loopDriftLimitHzPerS({ noiseBandwidthHz: 20, damping: 0.7 }, Math.PI / 2)).toThrow(/permittedPhaseRad/)
    expect(() => loopDriftLimitHzPerS({ noiseBandwidthHz: 20, damping: 0.7 }, 0)).toThrow(/below 90°/)
  })
})
