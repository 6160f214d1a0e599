import { describe, expect, it } from 'vitest'
import { exactUncertainty } from '../../../shared/physics/predict/build-table'
import { createSiteTrack } from '../../../shared/physics/orbit/site-track'
import { checkCurveOf } from '../../../shared/physics/plan/check-curve'
import type { LinkModel, Turnaround } from '../../../shared/physics/types'
import { dayOf, highest, smallBudget, steppedRadio, tableOf, uhfLink } from '../../support/tables'

const day = dayOf('SSO500', 'S42')
const pass = highest(day.passes)
const query = { ...day, linkMinElevationRad: 0, radio: steppedRadio, budget: smallBudget, pass }
const sBand: LinkModel = { ...uhfLink, carrierHz: 2287.5e6, symbolRateHz: 200_000 }
const turnaround: Turnaround = { numerator: 240, denominator: 221, uplinkPrecompensated: false, uplinkHz: null }
const coherent = (changes: Partial<Turnaround> = {}): LinkModel => ({ ...sBand, turnaround: { ...turnaround, ...changes } })

describe('the table of a coherent link', () => {
  it('sweeps twice as far, and once where its uplink is pre-compensated', () => {
    const swing = (link: LinkModel) => {
      const { retunes } = tableOf({ ...query, link }).check
      return retunes[0]!.dopplerHz - retunes.at(-1)!.dopplerHz
    }
    // Source: mechanics, each leg by the same range rate; row for row within the rows' own spacing.
    expect(tableOf({ ...query, link: coherent() }).check).toMatchObject({ verdict: 'holds', faults: [], excess: [] })
    expect(swing(coherent()) / swing(sBand)).toBeGreaterThan(1.6)
    expect(swing(coherent({ uplinkPrecompensated: true })) / swing(sBand)).toBeGreaterThan(0.8)
    expect(swing(coherent({ uplinkPrecompensated: true })) / swing(sBand)).toBeLessThan(1.2)
  })

  it('counts no oscillator, neither the spacecraft’s nor the one that station uplink and receiver share', () => {
    // Source: mechanics. f(1 + b)·N/D received by a dial that is off by the same b.
    const budget = { ...smallBudget, spacecraftPpm: 20, stationPpm: 2 }
    expect(tableOf({ ...query, budget, link: sBand }).check.verdict).toBe('breaks')
    for (const uplinkPrecompensated of [true, false]) {
      expect(tableOf({ ...query, budget, link: coherent({ uplinkPrecompensated }) }).check).toMatchObject({ verdict: 'holds', budget: { oscillatorHz: 0 } })
    }
  })

  it('answers to clock, orbit and UT1 by both legs on the checker’s curve, and on the planner’s', () => {
    // Source: mechanics, twice the one-way partials to a part in a thousand.
    const span = { fromMs: pass.aosMs, toMs: pass.losMs }
    const curve = (link: LinkModel) => checkCurveOf({ ...query, link, ut1MinusUtcS: 0, span })
    const track = createSiteTrack(day.ephemeris, day.site, 0)
    const oneWay = curve(sBand)
    const plannedOneWay = exactUncertainty(track, sBand, { ...smallBudget, spacecraftPpm: 0, stationPpm: 0 }, steppedRadio)
    for (const uplinkPrecompensated of [true, false]) {
      const link = coherent({ uplinkPrecompensated })
      const both = curve(link)
      const planned = exactUncertainty(track, link, smallBudget, steppedRadio)
      for (const share of [0.2, 0.5, 0.8]) {
        const at = pass.aosMs + share * (pass.losMs - pass.aosMs)
        expect(both.answerHzPerS(at) / oneWay.answerHzPerS(at)).toBeCloseTo(2, 2)
        expect(both.alongTrackHzPerS(at) / oneWay.alongTrackHzPerS(at)).toBeCloseTo(2, 2)
        expect(both.ut1HzPerS(at) / oneWay.ut1HzPerS(at)).toBeCloseTo(2, 2)
        expect(planned(at) / plannedOneWay(at)).toBeCloseTo(2, 2)
        expect(both.rateHzPerS(at) / oneWay.rateHzPerS(at)).toBeCloseTo(uplinkPrecompensated ? 1 : 2, 2)
      }
    }
  })

  it('scales the symbol clock by one leg, since the spacecraft counts its symbols by its own clock', () => {
    const [slowest, fastest] = tableOf({ ...query, link: sBand }).check.symbolClockPpm
    const own = tableOf({ ...query, link: coherent() }).check.symbolClockPpm
    // The same pass to a thousandth of a part per million; two legs would be near 40 (mechanics: 22.7 at the horizon from 500 km).
    expect(own[0]).toBeCloseTo(slowest, 3)
    expect(own[1]).toBeCloseTo(fastest, 3)
    expect(own[1]).toBeLessThan(24)
  })

  it('stands where the stated uplink puts it', () => {
    const usual = tableOf({ ...query, link: coherent() }).rows[0]!.frequencyHz
    const moved = tableOf({ ...query, link: coherent({ uplinkHz: 2106.40625e6 + 221_000 }) }).rows[0]!.frequencyHz
    // 221 kHz up are 240 kHz down (arithmetic), give or take a tie between neighbouring steps.
    expect(Math.abs(moved - usual - 240_000)).toBeLessThan(40)
  })
})
