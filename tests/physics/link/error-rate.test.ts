import { describe, expect, it } from 'vitest'
import { degradationCurve, requiredRatio } from '../../../shared/physics/link/degradation'
import { differential } from '../../../shared/physics/link/differential'
import { bitErrorRate, bitErrorRateAfterLoss, bitErrorRateAtOffset, requiredEbN0Db } from '../../../shared/physics/link/error-rate'
import { erfc } from '../../../shared/physics/link/erfc'
import { fsk } from '../../../shared/physics/link/fsk'
import type { Detector } from '../../../shared/physics/types'

describe('the bit error rate of BPSK', () => {
  it('is 1e-5 at 9.59 dB', () => {
    // Handbook value.
    expect(requiredEbN0Db(1e-5)).toBeCloseTo(9.59, 2)
    expect(bitErrorRate(9.588) / 1e-5).toBeCloseTo(1, 2)
  })

  it('is 7.9 % at 0 dB and 1e-3 at 6.79 dB', () => {
    // Handbook values.
    expect(bitErrorRate(0)).toBeCloseTo(0.0786, 4)
    expect(requiredEbN0Db(1e-3)).toBeCloseTo(6.79, 2)
  })

  it('stays where it was designed without loss, grows with loss and ends at a coin\'s toss', () => {
    expect(bitErrorRateAfterLoss(1e-5, 0)).toBeCloseTo(1e-5, 12)
    // Half the signal leaves Eb/N0 6.58 dB: ½ erfc √4.548.
    expect(bitErrorRateAfterLoss(1e-5, 10 * Math.log10(2))).toBeCloseTo(1.28e-3, 4)
    expect(bitErrorRateAfterLoss(1e-5, 300)).toBeCloseTo(0.5, 6)
  })

  it('refuses an error rate that no link has', () => {
    expect(() => requiredEbN0Db(0.5)).toThrow(/errorRate/)
    expect(() => requiredEbN0Db(0)).toThrow(/errorRate/)
  })
})

describe('the Eb/N0 that is needed for 1e-5', () => {
  // Handbook values (Proakis, Digital Communications): DBPSK ½e^(−γ), non-coherent binary FSK ½e^(−γ/2).
  it.each([['a differential detector', differential, 10.342], ['a non-coherent FSK detector', fsk, 13.352]] as const)('by %s is that of the handbooks', (_name, model, expected) => {
    const needed = requiredRatio(model, 1e-5)
    expect(10 * Math.log10(needed)).toBeCloseTo(expected, 3)
    expect(model.errorRate(needed, 0) / 1e-5).toBeCloseTo(1, 10)
    expect(() => requiredRatio(model, 0)).toThrow(/errorRate/)
  })
})

describe('the bit error rate after an offset', () => {
  const link = (detector: Detector) => ({ detector, symbolRateHz: 9600, rolloff: null, errorRate: 1e-5, esN0Db: 20 })
  const after = (detector: Detector, epsilon: number) => bitErrorRateAtOffset(link(detector), epsilon * 9600)

  it('is the link\'s own without one', () => {
    for (const detector of ['quadrature', 'coherent', 'msk', 'differential', 'fsk'] as const) expect(after(detector, 0)! / 1e-5).toBeCloseTo(1, 8)
  })

  it('of coherent bits is that of Eb/N0 less the loss', () => {
    // 3.922 dB (sinc of a half) off the 9.588 dB that 1e-5 needs: ½ erfc √(10^0.5666) = 3.3e-3, by a table of erfc.
    expect(after('quadrature', 0.5)).toBeCloseTo(3.3e-3, 4)
    expect(after('coherent', -0.25)).toBeCloseTo(3.3e-3, 4)
    expect(after('msk', 1)).toBeCloseTo(0.5, 6)
  })

  it('of a differential detector is a coin\'s toss at a quarter of the symbol rate and turns bits over beyond', () => {
    // Phase turns by 90° a symbol there, by 180° at a half: −1 is read for 1. Mechanics.
    expect(after('differential', 0.25)).toBeCloseTo(0.5, 9)
    expect(after('differential', 0.4)).toBeGreaterThan(0.9)
  })

  it('of an FSK detector half-way between its tones is a quarter: one tone is a toss, the other is clear', () => {
    // F(a,a) = ½ for one, next to nothing for the other: mechanics, for a strong signal.
    const strong = bitErrorRateAtOffset({ ...link('fsk'), errorRate: 1e-60 }, 4800)
    expect(strong).toBeCloseTo(0.25, 6)
  })

  it('costs by its degradation: with that much more signal the error rate is the link\'s own again', () => {
    for (const model of [differential, fsk]) {
      const extraDb = degradationCurve(model, 1e-7).lossDb(0.15)
      expect(model.errorRate(requiredRatio(model, 1e-7) * 10 ** (extraDb / 10), 0.15) / 1e-7).toBeCloseTo(1, 8)
    }
  })

  it('is not given where the modulation is not known or there is no curve', () => {
    expect(['multicarrier', 'chirp', 'stated'].map(detector => after(detector as Detector, 0.1))).toEqual([null, null, null])
  })
})

describe('the complementary error function', () => {
  // Abramowitz and Stegun, table 7.1, and the tail from the same book's table 7.3; from memory.
  it.each([[0, 1], [0.5, 0.4795001221869535], [1, 0.15729920705028513], [2, 0.004677734981047266], [3, 2.209049699858544e-5], [5, 1.5374597944280349e-12]])(
    'of %f is %f', (x, expected) => {
      expect(erfc(x) / expected).toBeCloseTo(1, 11)
    })

  it('runs smoothly through the change of method', () => {
    const slope = -2 / Math.sqrt(Math.PI) * Math.exp(-4)
    expect((erfc(2 + 1e-6) - erfc(2 - 1e-6)) / 2e-6 / slope).toBeCloseTo(1, 5)
  })
})
