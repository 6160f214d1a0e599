import { describe, expect, it } from 'vitest'
import { interSymbolInterferenceDb, overlap } from '../../../shared/physics/link/root-raised-cosine'
import { LOSS_CAP_DB, lossDb } from '../../../shared/physics/link/loss'
import type { Detector } from '../../../shared/physics/types'

const SYMBOL_RATE = 9600
const link = (detector: Detector, rolloff: number | null = null) => ({ detector, rolloff, symbolRateHz: SYMBOL_RATE, errorRate: 1e-5, esN0Db: 20 })

describe('loss of a quadrature detector', () => {
  // Tables of sinc²; 3.92 dB at half a bin is the scalloping loss of Harris 1978.
  it.each([[0.05, 0.036], [0.1, 0.143], [0.2, 0.579], [0.25, 0.912], [0.3, 1.326], [0.4, 2.420], [0.5, 3.922]])(
    'at %f symbol rates of offset is %f dB', (epsilon, expected) => {
      expect(lossDb(link('quadrature'), epsilon * SYMBOL_RATE)).toBeCloseTo(expected, 3)
      expect(lossDb(link('quadrature'), -epsilon * SYMBOL_RATE)).toBeCloseTo(expected, 3)
    })

  it('is nothing on frequency and the cap at its first null, one symbol rate away', () => {
    expect(lossDb(link('quadrature'), 0)).toBe(0)
    expect(lossDb(link('quadrature'), SYMBOL_RATE)).toBe(LOSS_CAP_DB)
  })

  it('is half the power at 0.443/T', () => {
    // Common practice: half-power width of a rectangular pulse's matched filter.
    expect(lossDb(link('quadrature'), 0.443 * SYMBOL_RATE)).toBeCloseTo(10 * Math.log10(2), 2)
  })
})

describe('loss of a coherent detector', () => {
  it('is that of a quadrature detector at twice the offset', () => {
    expect(lossDb(link('coherent'), 0.05 * SYMBOL_RATE)).toBeCloseTo(0.143, 3)
    expect(lossDb(link('coherent'), 0.25 * SYMBOL_RATE)).toBeCloseTo(3.922, 3)
  })

  it('has its first null at half a symbol rate and lets nothing through at a whole one either', () => {
    // Common practice: integrate-and-dump with a coherent carrier.
    expect(lossDb(link('coherent'), 0.5 * SYMBOL_RATE)).toBe(LOSS_CAP_DB)
    expect(lossDb(link('coherent'), SYMBOL_RATE)).toBe(LOSS_CAP_DB)
  })
})

describe('loss with root-raised-cosine filters', () => {
  it('is 0.277 dB at a tenth of the symbol rate and roll-off 0.35, with interference 27 dB down', () => {
    // From memory; the case below recomputes the integral on a fine grid.
    expect(lossDb(link('quadrature', 0.35), 0.1 * SYMBOL_RATE)).toBeCloseTo(0.277, 3)
    expect(interSymbolInterferenceDb(0.1, 0.35)).toBeCloseTo(-27, 0)
  })

  it('agrees with a plain sum over a fine grid of the published spectrum', () => {
    for (const rolloff of [0.2, 0.5, 1]) {
      for (const epsilon of [0.02, 0.3, 0.9, 1.1]) {
        expect(overlap(epsilon, rolloff)).toBeCloseTo(plainOverlap(epsilon, rolloff), 6)
      }
    }
  })

  it('without roll-off is the part of two boxes that overlaps', () => {
    expect(overlap(0.25, 0)).toBeCloseTo(0.75, 12)
  })

  it('is the cap where the two spectra no longer touch', () => {
    expect(lossDb(link('quadrature', 0.35), 1.36 * SYMBOL_RATE)).toBe(LOSS_CAP_DB)
  })

  it('leaves no interference on frequency, as the Nyquist criterion demands', () => {
    expect(interSymbolInterferenceDb(0, 0.35)).toBeLessThan(-120)
  })
})

it('a stated limit and a chirp have no loss curve', () => {
  expect(lossDb(link('stated'), 100)).toBeNull()
  expect(lossDb(link('chirp'), 100)).toBeNull()
})

/** Raised cosine written out from its usual definition, its square root, and a midpoint sum. */
function plainOverlap(epsilon: number, rolloff: number): number {
  const spectrum = (f: number) => {
    const a = Math.abs(f)
    if (a > (1 + rolloff) / 2) return 0
    if (a < (1 - rolloff) / 2) return 1
    return Math.sqrt(0.5 * (1 + Math.cos(Math.PI / rolloff * (a - (1 - rolloff) / 2))))
  }
  const step = 1e-5
  let sum = 0
  for (let f = -1; f < 1 + epsilon; f += step) sum += spectrum(f + step / 2) * spectrum(f + step / 2 - epsilon) * step
  return sum
}
