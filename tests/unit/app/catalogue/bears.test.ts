import { describe, expect, it } from 'vitest'
import { bearsText, detectorSentence, limitsAsTyped, nullHz } from '~/utils/catalogue/bears'

const link = { symbolRateHz: 9600, detector: 'quadrature', permittedLossDb: 0.5, captureRangeHz: null, filterBandwidthHz: null, rolloff: null, limitHz: null } as const

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
    expect(detectorSentence('quadrature', null, null)).toMatch(/at the symbol rate\.$/)
  })

  it('places the null of each detector: 1/T in quadrature, 1/(2T) coherent, none when stated', () => {
    // First nulls of sinc ε and sinc 2ε (common practice).
    expect(nullHz(link)).toBe(9600)
    expect(nullHz({ ...link, detector: 'coherent' })).toBe(4800)
    expect(nullHz({ ...link, detector: 'stated' })).toBeNull()
    expect(detectorSentence('coherent', 9600, null)).toContain('half the symbol rate: 4\u202F800 Hz here')
  })
})
