import { describe, expect, it } from 'vitest'
import { bearsText, limitedByWords, limitsAsTyped } from '~/utils/catalogue/bears'

const link = { symbolRateHz: 9600, detector: 'quadrature', permittedLossDb: 0.5, captureRangeHz: null, filterBandwidthHz: null, rolloff: null, limitHz: null, errorRate: 1e-5, esN0Db: 20, bandwidthHz: null, spreadingFactor: null } as const

describe('what a link bears, in the form', () => {
  it('says 1 786 Hz by its loss for 9 600 symbols a second, quadrature, 0.5 dB', () => {
    // ε = 0.185991 at 0.5 dB: inverted sinc, recomputed by hand (common practice).
    const [allowance] = limitsAsTyped(link)
    expect(allowance?.limitedBy).toBe('loss')
    expect(allowance?.allowanceHz).toBeCloseTo(0.185991 * 9600, 1)
    expect(bearsText(allowance!)).toBe('1\u202F786 Hz, by its loss')
  })

  it('lists every limit, the binding one first', () => {
    // Filter: B/2 − Rs/2 = 8000 − 4800 = 3200 Hz.
    const limits = limitsAsTyped({ ...link, captureRangeHz: 1200, filterBandwidthHz: 16_000 })
    expect(limits.map(limit => [limit.limitedBy, Math.round(limit.allowanceHz)])).toEqual([['captureRange', 1200], ['loss', 1786], ['filter', 3200]])
  })

  it('has no limit while the symbol rate is not typed, and keeps quiet about it', () => {
    expect(limitsAsTyped({ ...link, symbolRateHz: null as unknown as number })).toEqual([])
  })

  it('counts a chirp’s bandwidth against the filter and calls its limit by it', () => {
    // A quarter of 125 kHz (common practice); (140 kHz − 125 kHz)/2 beside it.
    const limits = limitsAsTyped({ ...link, detector: 'chirp', bandwidthHz: 125_000, spreadingFactor: 7, filterBandwidthHz: 140_000 })
    expect(limits.map(limit => [limit.limitedBy, limit.allowanceHz])).toEqual([['filter', 7500], ['stated', 31_250]])
    expect(limitedByWords('stated', 'chirp')).toBe('by a quarter of its bandwidth')
    expect(limitedByWords('stated', 'stated')).toBe('by its stated limit')
  })

  it('waits for a chirp’s bandwidth and for an error rate that a link can have', () => {
    expect(limitsAsTyped({ ...link, detector: 'chirp' })).toEqual([])
    expect(limitsAsTyped({ ...link, detector: 'fsk', errorRate: 0.5 })).toEqual([])
  })
})
