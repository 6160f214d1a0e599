import { describe, expect, it } from 'vitest'
import { erfc } from '../../../shared/physics/link/erfc'
import { bitErrorRate, bitErrorRateAfterLoss, requiredEbN0Db } from '../../../shared/physics/link/error-rate'

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
