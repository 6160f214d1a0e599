import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { LOSS_CAP_DB, lossDb, mainLobeEndEpsilon } from '../../../shared/physics/link/loss'
import type { Detector } from '../../../shared/physics/types'

const SYMBOL_RATE = 9600
const link = (detector: Detector) => ({ detector, symbolRateHz: SYMBOL_RATE, rolloff: null, errorRate: 1e-5, esN0Db: 20 })
const lossAt = (detector: Detector, epsilon: number, changes: Partial<ReturnType<typeof link>> = {}) => lossDb({ ...link(detector), ...changes }, epsilon * SYMBOL_RATE)!

describe('loss of an MSK detector', () => {
  it('is 0.225 dB at a tenth and 6.02 dB at half of the bit rate', () => {
    // The half-sine pulse's closed form by hand: sinc 0.2/0.96; at a half its limit is ½.
    expect(lossAt('msk', 0.1)).toBeCloseTo(0.225, 3)
    expect(lossAt('msk', -0.5)).toBeCloseTo(20 * Math.log10(2), 9)
  })

  it('is that of a plain sum over the half-sine pulse, its removable 0/0 included', () => {
    // ∫cos²(πt/2)·cos(2πεt) dt from −1 to 1, the definition, T = 1; the sum is exact for a periodic smooth integrand's ends.
    for (const epsilon of [0.01, 0.249, 0.251, 0.4999, 0.5001, 0.8]) {
      let sum = 0
      for (let i = 0; i < 20_000; i++) {
        const t = -1 + (i + 0.5) / 10_000
        sum += Math.cos(Math.PI * t / 2) ** 2 * Math.cos(2 * Math.PI * epsilon * t) / 10_000
      }
      expect(lossAt('msk', epsilon)).toBeCloseTo(-20 * Math.log10(Math.abs(sum)), 6)
    }
  })
})

describe('degradation of a differential detector', () => {
  // Exact DBPSK error rate, recomputed from the stated formula.
  it.each([[0.02, 0.21], [0.05, 1.07], [0.1, 3.31]])('at 1e-5 and %f symbol rates is %f dB', (epsilon, expected) => {
    expect(lossAt('differential', epsilon)).toBeCloseTo(expected, 2)
    expect(lossAt('differential', -epsilon)).toBeCloseTo(expected, 2)
  })

  it('is more than the turn of phase alone would cost', () => {
    // cos²(2πε)·sinc²ε: the decision variable turned, noise times noise forgotten.
    for (const epsilon of [0.05, 0.1, 0.2]) {
      const turned = -20 * Math.log10(Math.cos(2 * Math.PI * epsilon) * Math.sin(Math.PI * epsilon) / (Math.PI * epsilon))
      expect(lossAt('differential', epsilon)).toBeGreaterThan(turned + 0.1)
    }
  })
})

describe('degradation of a non-coherent FSK detector', () => {
  // Exact error rate with unequal envelopes, recomputed from the stated formula.
  it.each([[0.05, 0.159], [0.1, 0.592], [0.2, 2.172], [0.25, 3.438]])('at 1e-5 and %f symbol rates is %f dB', (epsilon, expected) => {
    expect(Math.abs(lossAt('fsk', epsilon) - expected)).toBeLessThan(0.001)
    expect(Math.abs(lossAt('fsk', -epsilon) - expected)).toBeLessThan(0.001)
  })
})

describe('loss of a multicarrier signal', () => {
  it('is 0.542 dB at a fiftieth of the spacing and Es/N0 20 dB, where the form for small offsets says 0.571', () => {
    // Pollet, Van Bladel, Moeneclaey 1995: D ≈ (10/(3 ln 10))·(πε)²·Es/N0.
    const pollet = (epsilon: number, esN0 = 100) => 10 / (3 * Math.LN10) * (Math.PI * epsilon) ** 2 * esN0
    expect(lossAt('multicarrier', 0.02)).toBeCloseTo(0.542, 3)
    expect(Math.abs(pollet(0.02) - 0.571)).toBeLessThan(0.001)
    expect(lossAt('multicarrier', 0.0001, { esN0Db: 40 }) / pollet(0.0001, 1e4)).toBeCloseTo(1, 3)
  })

  it('is the plain sinc² where noise drowns the neighbours, and grows with Es/N0', () => {
    // 3.922 dB is the scalloping loss of Harris 1978.
    expect(lossAt('multicarrier', 0.5, { esN0Db: -60 })).toBeCloseTo(3.922, 3)
    expect(lossAt('multicarrier', 0.05, { esN0Db: 30 })).toBeGreaterThan(lossAt('multicarrier', 0.05, { esN0Db: 20 }) + 5)
  })
})

describe('every detector with a curve', () => {
  // Nulls: zeros of sinc ε, sinc 2ε and sinc 2ε/(1 − 4ε²); failures: phase turned by 90° a symbol; a tone between both filters.
  const ends: [Detector, number][] = [['quadrature', 1], ['coherent', 0.5], ['msk', 1], ['differential', 0.25], ['fsk', 0.5], ['multicarrier', 1]]

  it.each(ends)('%s loses nothing on frequency and everything at %f symbol rates', (detector, end) => {
    expect(lossAt(detector, 0)).toBeCloseTo(0, 9)
    expect(mainLobeEndEpsilon(link(detector))).toBe(end)
    expect(lossAt(detector, end)).toBe(LOSS_CAP_DB)
    expect(lossAt(detector, -end)).toBe(LOSS_CAP_DB)
    expect(lossAt(detector, 0.98 * end)).toBeLessThan(60)
  })

  it('loses more the farther it is off, all along the main lobe, at any error rate and Es/N0', () => {
    const unit = fc.double({ min: 0, max: 1, noNaN: true })
    fc.assert(fc.property(fc.constantFrom(...ends), unit, unit, fc.double({ min: 0.5, max: 30, noNaN: true }), fc.double({ min: -20, max: 50, noNaN: true }), ([detector, end], x, y, power, esN0Db) => {
      const changes = { errorRate: 10 ** -power, esN0Db }
      const [near, far] = [Math.min(x, y) * end, Math.max(x, y) * end]
      const [less, more] = [lossAt(detector, near, changes), lossAt(detector, far, changes)]
      expect(less).toBeGreaterThanOrEqual(0)
      expect(more).toBeLessThanOrEqual(LOSS_CAP_DB)
      expect(more).toBeGreaterThanOrEqual(less - 1e-8)
    }), { numRuns: 2000 })
  })
})
