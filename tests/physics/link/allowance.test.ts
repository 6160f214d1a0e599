import { describe, expect, it } from 'vitest'
import { allowanceOf } from '../../../shared/physics/link/allowance'
import type { LinkModel } from '../../../shared/physics/types'

const link: LinkModel = {
  direction: 'downlink', carrierHz: 437.5e6, symbolRateHz: 9600, detector: 'quadrature', permittedLossDb: 0.5,
  captureRangeHz: null, filterBandwidthHz: null, rolloff: null, driftLimitHzPerS: null, jumpLimitHz: null, limitHz: null,
  errorRate: 1e-5, bandLowHz: null, bandHighHz: null,
}

describe('the allowance of a link', () => {
  it('for 9600 symbols a second and half a decibel is 1785.5 Hz', () => {
    // 0.185991 of the symbol rate, from tables of sinc.
    const { allowanceHz, epsilon, symbolTimeS, limitedBy } = allowanceOf(link)
    expect(allowanceHz).toBeCloseTo(0.185991 * 9600, 1)
    expect(epsilon).toBeCloseTo(0.185991, 6)
    expect(symbolTimeS).toBe(1 / 9600)
    expect(limitedBy).toBe('loss')
  })

  // Tables of sinc, from memory; the coherent detector bears half as much (common practice).
  it.each([[0.1, 0.083564], [0.25, 0.131897], [0.5, 0.185991], [1, 0.261500], [2, 0.365466], [3, 0.442243]])(
    'for %f dB is %f symbol rates in quadrature and half of it coherently', (permittedLossDb, epsilon) => {
      expect(allowanceOf({ ...link, permittedLossDb }).epsilon).toBeCloseTo(epsilon, 6)
      expect(allowanceOf({ ...link, permittedLossDb, detector: 'coherent' }).epsilon).toBeCloseTo(epsilon / 2, 6)
    })

  it('stays on the main lobe however much loss is permitted', () => {
    expect(allowanceOf({ ...link, permittedLossDb: 60 }).epsilon).toBeLessThan(1)
    expect(allowanceOf({ ...link, permittedLossDb: 60, detector: 'coherent' }).epsilon).toBeLessThan(0.5)
  })

  it('with roll-off is smaller, a tenth of the symbol rate at 0.277 dB for roll-off 0.35', () => {
    expect(allowanceOf({ ...link, rolloff: 0.35, permittedLossDb: 0.277 }).epsilon).toBeCloseTo(0.1, 3)
  })

  it('is the capture range where that is smaller, and says so', () => {
    expect(allowanceOf({ ...link, captureRangeHz: 500 })).toMatchObject({ allowanceHz: 500, limitedBy: 'captureRange' })
    expect(allowanceOf({ ...link, captureRangeHz: 5000 }).limitedBy).toBe('loss')
  })

  it('is what the receiver\'s filter leaves where that is smaller, roll-off included', () => {
    // (1 + 0.25)·9600/2 + Δf ≤ 14000/2 leaves exactly 1000 Hz.
    expect(allowanceOf({ ...link, filterBandwidthHz: 14000, rolloff: 0.25 })).toMatchObject({ allowanceHz: 1000, limitedBy: 'filter' })
  })

  it('is zero, limited by the filter, where the filter is narrower than the signal', () => {
    expect(allowanceOf({ ...link, filterBandwidthHz: 9000 })).toMatchObject({ allowanceHz: 0, epsilon: 0, limitedBy: 'filter' })
  })

  it('is the stated limit for a modem that has only a data sheet', () => {
    expect(allowanceOf({ ...link, detector: 'stated', limitHz: 2500 })).toMatchObject({ allowanceHz: 2500, limitedBy: 'stated' })
  })

  it('says what is missing or out of range', () => {
    expect(() => allowanceOf({ ...link, detector: 'stated' })).toThrow(/limitHz/)
    expect(() => allowanceOf({ ...link, permittedLossDb: 0 })).toThrow(/permittedLossDb/)
    expect(() => allowanceOf({ ...link, symbolRateHz: Number.NaN })).toThrow(/symbolRateHz/)
    expect(() => allowanceOf({ ...link, rolloff: 1.5 })).toThrow(/rolloff/)
  })
})
