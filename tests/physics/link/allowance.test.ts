import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { allowanceOf } from '../../../shared/physics/link/allowance'
import { chirpDriftPerPacketHz, chirpSymbolRateHz } from '../../../shared/physics/link/chirp'
import { lossDb } from '../../../shared/physics/link/loss'
import type { Detector, LinkModel } from '../../../shared/physics/types'

const link: LinkModel = {
  direction: 'downlink', carrierHz: 437.5e6, symbolRateHz: 9600, detector: 'quadrature', permittedLossDb: 0.5,
  captureRangeHz: null, filterBandwidthHz: null, rolloff: null, driftLimitHzPerS: null, jumpLimitHz: null, limitHz: null,
  errorRate: 1e-5, esN0Db: 20, bandwidthHz: null, spreadingFactor: null, bandLowHz: null, bandHighHz: null,
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

  // The degradations and losses of detectors.test.ts, read backwards; sources there.
  it.each<[Detector, number, number, number]>([
    ['msk', 6.0206, 0.5, 5], ['differential', 1.068, 0.05, 4], ['differential', 3.31, 0.1, 4],
    ['fsk', 0.159, 0.05, 4], ['fsk', 2.172, 0.2, 4], ['multicarrier', 0.5424, 0.02, 5],
  ])('of %s at %f dB is %f symbol rates', (detector, permittedLossDb, epsilon, digits) => {
    const allowance = allowanceOf({ ...link, detector, permittedLossDb })
    expect(allowance.epsilon).toBeCloseTo(epsilon, digits)
    expect(allowance.limitedBy).toBe('loss')
  })

  it('inverts every curve: the loss there is the permitted one', () => {
    const curves: Detector[] = ['quadrature', 'coherent', 'msk', 'differential', 'fsk', 'multicarrier']
    fc.assert(fc.property(fc.constantFrom(...curves), fc.double({ min: 0.01, max: 20, noNaN: true }), fc.double({ min: 1, max: 12, noNaN: true }), fc.double({ min: -5, max: 40, noNaN: true }), (detector, permittedLossDb, power, esN0Db) => {
      const at = { ...link, detector, permittedLossDb, errorRate: 10 ** -power, esN0Db }
      expect(lossDb(at, allowanceOf(at).allowanceHz)).toBeCloseTo(permittedLossDb, 8)
    }), { numRuns: 300 })
  })

  it('is smaller where fewer errors are borne, by differential and FSK detectors', () => {
    for (const detector of ['differential', 'fsk'] as const) {
      expect(allowanceOf({ ...link, detector, errorRate: 1e-9 }).allowanceHz).toBeLessThan(0.9 * allowanceOf({ ...link, detector, errorRate: 1e-3 }).allowanceHz)
    }
  })

  it('is there in under 2 ms, since a form asks for it at each key stroke', () => {
    for (const detector of ['quadrature', 'differential', 'fsk'] as const) {
      const started = performance.now()
      for (let i = 0; i < 100; i++) allowanceOf({ ...link, detector, permittedLossDb: 0.1 + i / 10, rolloff: detector === 'quadrature' ? 0.35 : null })
      expect((performance.now() - started) / 100).toBeLessThan(2)
    }
  })

  it('of a chirp is a quarter of its bandwidth whatever its loss, a limit and no curve', () => {
    // Common practice: a receiver of chirps bears ±25 % of the bandwidth.
    const chirp = { ...link, detector: 'chirp', bandwidthHz: 125_000, spreadingFactor: 10, symbolRateHz: 125_000 / 1024 } as const
    expect(allowanceOf(chirp)).toMatchObject({ allowanceHz: 31_250, limitedBy: 'stated' })
    expect(allowanceOf({ ...chirp, permittedLossDb: 3 }).allowanceHz).toBe(31_250)
    expect(allowanceOf({ ...chirp, captureRangeHz: 20_000 })).toMatchObject({ allowanceHz: 20_000, limitedBy: 'captureRange' })
    // 125 kHz of signal in a 150 kHz filter.
    expect(allowanceOf({ ...chirp, filterBandwidthHz: 150_000 })).toMatchObject({ allowanceHz: 12_500, limitedBy: 'filter' })
  })

  it('of a chirp leaves a third of a frequency step for the drift within a packet', () => {
    // By hand: 125 kHz / 1024 = 122.07 Hz a step and 122.07 symbols a second; a third is 40.69 Hz.
    const shape = { bandwidthHz: 125_000, spreadingFactor: 10 }
    expect(chirpSymbolRateHz(shape)).toBeCloseTo(122.07, 2)
    expect(chirpDriftPerPacketHz(shape)).toBeCloseTo(40.69, 2)
    expect(() => chirpDriftPerPacketHz({ ...shape, spreadingFactor: null })).toThrow(/spreadingFactor/)
  })

  it('of many subcarriers has the filter pass their whole bandwidth where it is stated', () => {
    const many = { ...link, detector: 'multicarrier', permittedLossDb: 3, symbolRateHz: 15_000, bandwidthHz: 1_080_000, filterBandwidthHz: 1_081_000 } as const
    expect(allowanceOf(many)).toMatchObject({ allowanceHz: 500, limitedBy: 'filter' })
  })

  it('says what is missing or out of range', () => {
    expect(() => allowanceOf({ ...link, detector: 'chirp' })).toThrow(/bandwidthHz/)
    expect(() => allowanceOf({ ...link, detector: 'fsk', errorRate: 0.5 })).toThrow(/errorRate/)
    expect(() => allowanceOf({ ...link, detector: 'multicarrier', esN0Db: Number.NaN })).toThrow(/esN0Db/)
    expect(() => allowanceOf({ ...link, detector: 'stated' })).toThrow(/limitHz/)
    expect(() => allowanceOf({ ...link, permittedLossDb: 0 })).toThrow(/permittedLossDb/)
    expect(() => allowanceOf({ ...link, symbolRateHz: Number.NaN })).toThrow(/symbolRateHz/)
    expect(() => allowanceOf({ ...link, rolloff: 1.5 })).toThrow(/rolloff/)
  })
})
