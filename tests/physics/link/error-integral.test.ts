import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { decisionError } from '../../../shared/physics/link/error-integral'

describe('the chance that the weaker of two noisy envelopes reads the stronger', () => {
  it('is ½e^(−b²/2) when one holds nothing but noise', () => {
    // Rayleigh against Rice: the handbooks' error rate of non-coherent binary FSK.
    for (const b of [0, 0.1, 1, 3, 6, 20]) expect(decisionError(0, b) / (0.5 * Math.exp(-b * b / 2))).toBeCloseTo(1, 11)
  })

  it('is a half when both are equal, and what one wins the other loses', () => {
    fc.assert(fc.property(fc.double({ min: 0, max: 30, noNaN: true }), fc.double({ min: 0, max: 30, noNaN: true }), (a, b) => {
      expect(decisionError(a, a)).toBeCloseTo(0.5, 12)
      expect(decisionError(a, b) + decisionError(b, a)).toBeCloseTo(1, 12)
      if (a < b) expect(decisionError(a, b)).toBeLessThanOrEqual(0.5 * Math.exp(-((b - a) ** 2) / 2) * (1 + 1e-12))
    }))
  })

  // Q₁ from scipy 1.17.1: ncx2.sf(b², 2, a²), the tail of a noncentral χ²; I₀ by its power series (DLMF 10.25.2).
  it.each([[1, 2, 0.26901206003591], [0.5, 4, 0.0007370353068048485], [3, 3.1, 0.5267350667557436], [2, 6, 5.6458894447796096e-5], [1, 1.001, 0.7324139403463039]])(
    'agrees with the Marcum function of another library at a = %f, b = %f', (a, b, marcum) => {
      const expected = marcum - 0.5 * Math.exp(-((b - a) ** 2) / 2) * besselI0Scaled(a * b)
      expect(decisionError(a, b) / expected).toBeCloseTo(1, 10)
    })

  // Both ways of summing, either side of a difference of 0.3, large and small figures.
  it.each([[1, 1.29], [1, 1.31], [3, 3.29], [3, 3.31], [0.01, 0.02], [2, 2.0001], [6, 9], [20, 20.5]])(
    'agrees with an integral of Rice\'s density at a = %f, b = %f', (a, b) => {
      expect(decisionError(a, b) / byDensity(a, b)).toBeCloseTo(1, 7)
    })

  it('keeps its digits where a difference of two Marcum functions would have none left', () => {
    // mpmath 1.3.0, 120 digits, of the same definition.
    expect(decisionError(2, 12) / 1.094473532757177e-23).toBeCloseTo(1, 10)
    expect(decisionError(5, 26) / 4.46226730797949e-98).toBeCloseTo(1, 10)
  })
})

/** Q₁ as the integral of Rice's density from b on, by the midpoint rule, and the other term written out. */
function byDensity(a: number, b: number): number {
  const step = 2e-4
  let tail = 0
  for (let x = b + step / 2; x < b + 12; x += step) tail += x * Math.exp(-((x - a) ** 2) / 2) * besselI0Scaled(a * x) * step
  return tail - 0.5 * Math.exp(-((b - a) ** 2) / 2) * besselI0Scaled(a * b)
}

/** I₀(x)·e^(−x) by the power series. */
function besselI0Scaled(x: number): number {
  let [term, sum] = [1, 1]
  for (let k = 1; term > 1e-17 * sum; k++) {
    term *= (x / 2) ** 2 / (k * k)
    sum += term
  }
  return sum * Math.exp(-x)
}
