import { describe, expect, it } from 'vitest'
import { partialAlongTrackHzPerS, partialUt1HzPerS } from '../../../shared/physics/orbit/along-track'
import { checkCurveOf, directOffsetHz } from '../../../shared/physics/plan/check-curve'
import type { StateTeme } from '../../../shared/physics/types'
import { propagatorOf, referenceDoppler } from '../../support/reference-data'
import { elementsFromLines, siteFromDegrees } from '../../support/reference-elements'
import { dayOf, highest } from '../../support/tables'

const passes = referenceDoppler().passes.map((pass) => {
  const fromMs = Date.parse(pass.windowStart) + pass.startS * 1000
  return {
    pass, propagator: propagatorOf(elementsFromLines(pass.line1, pass.line2)), site: siteFromDegrees(pass.station),
    span: { fromMs, toMs: fromMs + (pass.rangeRateMps.length - 1) * pass.stepS * 1000 },
  }
})
const directions = ['downlink', 'uplink'] as const

describe('the checker\'s own curve of the needed frequency', () => {
  // Skyfield and python-sgp4 (data/README.md), to its stated tolerances.
  it.each([[437_500_000, 0.05], [2_245_000_000, 0.2], [8_200_000_000, 0.5]])('agrees with the independent programs at %i Hz, both ways', (carrierHz, toleranceHz) => {
    for (const { pass, ...query } of passes) {
      for (const direction of directions) {
        const expected = (direction === 'downlink' ? pass.receivedMinusCarrierHz : pass.transmitMinusCarrierHz)[`${carrierHz}.0`]!
        const curve = checkCurveOf({ ...query, link: { direction, carrierHz }, ut1MinusUtcS: 0 })
        expected.forEach((offsetHz, i) => {
          expect(Math.abs(curve.offsetHz(query.span.fromMs + i * pass.stepS * 1000) - offsetHz)).toBeLessThan(toleranceHz)
        })
      }
    }
  })

  it('keeps within a thousandth of a hertz and 1e-12 of the carrier of direct propagation between its points', () => {
    // A very low orbit runs through its culmination fastest.
    const low = dayOf('VLEO250', 'HI25')
    const pass = highest(low.passes)
    const all = [...passes, { propagator: low.propagator, site: low.site, span: { fromMs: pass.aosMs, toMs: pass.losMs } }]
    for (const carrierHz of [145e6, 437.5e6, 8.2e9]) {
      for (const query of all) {
        const link = { direction: 'downlink' as const, carrierHz }
        const curve = checkCurveOf({ ...query, link, ut1MinusUtcS: 0.1 })
        for (let at = query.span.fromMs; at <= query.span.toMs; at += (query.span.toMs - query.span.fromMs) / 397.3) {
          const direct = directOffsetHz({ ...query, link, ut1MinusUtcS: 0.1 }, at)
          expect(Math.abs(curve.offsetHz(at) - direct)).toBeLessThan(1e-3 + 1e-12 * carrierHz)
        }
      }
    }
  })

  it('has a rate that is the slope of direct propagation', () => {
    for (const query of passes) {
      const link = { direction: 'uplink' as const, carrierHz: 437.5e6 }
      const curve = checkCurveOf({ ...query, link, ut1MinusUtcS: 0 })
      const direct = (at: number) => directOffsetHz({ ...query, link, ut1MinusUtcS: 0 }, at)
      for (let at = query.span.fromMs + 1000; at < query.span.toMs - 1000; at += (query.span.toMs - query.span.fromMs) / 41.7) {
        // Chords over 0.2 s and 0.4 s, extrapolated to none (Richardson).
        const chord = (ms: number) => (direct(at + ms) - direct(at - ms)) / (2 * ms / 1000)
        expect(curve.rateHzPerS(at)).toBeCloseTo((4 * chord(100) - chord(200)) / 3, 2)
      }
    }
  })

  it('answers to the spacecraft\'s timing and to UT1 as differences taken another way do', () => {
    for (const query of passes) {
      const stateAt = (at: number): StateTeme | null => {
        const state = query.propagator.at(at)
        return state.ok ? state : null
      }
      const link = { direction: 'downlink' as const, carrierHz: 437.5e6 }
      const curve = checkCurveOf({ ...query, link, ut1MinusUtcS: 0 })
      for (let at = query.span.fromMs; at <= query.span.toMs; at += (query.span.toMs - query.span.fromMs) / 29.9) {
        const path = { ...link, stateAt, site: query.site, ut1MinusUtcS: 0 }
        expect(Math.abs(curve.alongTrackHzPerS(at))).toBeCloseTo(partialAlongTrackHzPerS(path, at), 1)
        expect(Math.abs(curve.ut1HzPerS(at))).toBeCloseTo(partialUt1HzPerS(path, at), 1)
      }
    }
  })

  it('says when the element set ends rather than giving a number', () => {
    const query = passes[0]!
    const failing = { elements: query.propagator.elements, at: () => ({ ok: false, error: 'decayed' } as const), atMinutes: () => ({ ok: false, error: 'decayed' } as const) }
    expect(() => checkCurveOf({ ...query, propagator: failing, link: { direction: 'downlink', carrierHz: 437.5e6 }, ut1MinusUtcS: 0 })).toThrow(/decayed/)
  })

  it('reaches the very end of an element set on an uplink, whose signal arrives after it', () => {
    const query = passes[0]!
    const { fromMs } = query.span
    const ending = { ...query.propagator, at: (at: number) => at <= fromMs ? query.propagator.at(at) : { ok: false, error: 'decayed' } as const }
    const ask = { ...query, link: { direction: 'uplink' as const, carrierHz: 437.5e6 }, ut1MinusUtcS: 0 }
    expect(directOffsetHz({ ...ask, propagator: ending }, fromMs)).toBeCloseTo(directOffsetHz(ask, fromMs), 2)
  })
})
