import { describe, expect, it } from 'vitest'
import { createNeededFrequency } from '../../../shared/physics/doppler/needed'
import { createSeenFrequency, seenPartials } from '../../../shared/physics/doppler/seen-ratio'
import { partialAlongTrackHzPerS, partialUt1HzPerS } from '../../../shared/physics/orbit/along-track'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { lookAt } from '../../../shared/physics/orbit/look'
import { createSiteTrack } from '../../../shared/physics/orbit/site-track'
import { propagatorOf, referenceDoppler, referencePasses } from '../../support/reference-data'
import { elementsFromLines, siteFromDegrees } from '../../support/reference-elements'

const carriers = [145e6, 437.5e6, 8.2e9]
const directions = ['downlink', 'uplink'] as const
const { satellites, stations } = referencePasses()
const [site] = [siteFromDegrees(stations[1]!)]
const days = satellites.map((satellite) => {
  const fromMs = Date.parse(satellite.windowStart)
  const ephemeris = createEphemeris(propagatorOf(elementsFromLines(satellite.line1, satellite.line2)), fromMs, fromMs + 86_400_000)
  return { id: satellite.id, fromMs, ephemeris }
})

/** Instants at which the spacecraft stands above the station's horizon, as long as the set is valid. */
function inView({ ephemeris, fromMs }: typeof days[number]): number[] {
  const times = Array.from({ length: 1500 }, (_, k) => fromMs + 57_234.5 * k).filter(t => t < ephemeris.toMs - 2000)
  const up = times.filter(t => lookAt(ephemeris.stateAt(t)!, site!, t, 0.2).elevationRad > 0)
  return up.filter((_, k) => k % Math.ceil(up.length / 60) === 0)
}

const seenDays = days.filter(day => inView(day).length > 0)

describe('the needed frequency along a track', () => {
  it('is tried on most of the reference orbits', () => {
    expect(seenDays.length).toBeGreaterThan(days.length / 2)
  })

  it('agrees with the independent programs, both ways', () => {
    // Source: Skyfield and python-sgp4 (data/README.md), 0.05 Hz at 437.5 MHz, 0.5 Hz at 8.2 GHz.
    for (const pass of referenceDoppler().passes) {
      const fromMs = Date.parse(pass.windowStart) + pass.startS * 1000
      const toMs = fromMs + (pass.rangeRateMps.length - 1) * pass.stepS * 1000
      const track = createSiteTrack(createEphemeris(propagatorOf(elementsFromLines(pass.line1, pass.line2)), fromMs, toMs), siteFromDegrees(pass.station), 0)
      for (const [carrierHz, toleranceHz] of [[437_500_000, 0.05], [8_200_000_000, 0.5]] as const) {
        for (const direction of directions) {
          const expected = (direction === 'downlink' ? pass.receivedMinusCarrierHz : pass.transmitMinusCarrierHz)[`${carrierHz}.0`]!
          const needed = createSeenFrequency(track, direction, carrierHz)
          expected.forEach((hz, k) => expect(Math.abs(needed.dopplerHz(fromMs + k * pass.stepS * 1000) - hz)).toBeLessThan(toleranceHz))
        }
      }
    }
  })

  it.each(seenDays)('of $id is what the light time by iteration gives, to 1e-12 of the carrier, and so is its rate', (day) => {
    const { ephemeris, fromMs } = day
    const track = createSiteTrack(ephemeris, site!, 0.2)
    for (const carrierHz of carriers) {
      for (const direction of directions) {
        const seen = createSeenFrequency(track, direction, carrierHz)
        const needed = createNeededFrequency({ stateAt: ephemeris.stateAt, site: site!, ut1MinusUtcS: 0.2, direction, carrierHz })
        for (const t of inView(day)) {
          expect(Math.abs(seen.dopplerHz(t) - needed.dopplerHz(t))).toBeLessThan(1e-12 * carrierHz)
          expect(Math.abs(seen.rateHzPerS(t) - needed.rateHzPerS(t))).toBeLessThan(1e-11 * carrierHz)
        }
        expect(seen.frequencyHz(fromMs)).toBe(carrierHz + seen.dopplerHz(fromMs))
      }
    }
    expect(() => createSeenFrequency(track, 'downlink', 1e9).dopplerHz(fromMs - 60_000)).toThrow(RangeError)
  })

  it.each(seenDays)('of $id answers to timing and to UT1 as five-point differences do, within 0.2 % of the largest', (day) => {
    const { ephemeris } = day
    const track = createSiteTrack(ephemeris, site!, 0.2)
    for (const direction of directions) {
      const link = { stateAt: ephemeris.stateAt, site: site!, ut1MinusUtcS: 0.2, direction, carrierHz: 437.5e6 }
      const rate = createNeededFrequency(link).rateHzPerS
      const figures = inView(day).map(t => ({
        own: seenPartials(track, direction, 437.5e6, t), along: partialAlongTrackHzPerS(link, t), ut1: partialUt1HzPerS(link, t), rate: rate(t),
      }))
      // And 1e-12 of the carrier a second, for a spacecraft that all but stands still.
      const allowed = (of: (f: typeof figures[number]) => number) => 4e-4 + 2e-3 * Math.max(...figures.map(f => Math.abs(of(f))))
      for (const { own, along, ut1, rate: both } of figures) {
        expect(Math.abs(Math.abs(own.alongTrackHzPerS) - along)).toBeLessThan(allowed(f => f.along))
        expect(Math.abs(Math.abs(own.ut1HzPerS) - ut1)).toBeLessThan(allowed(f => f.ut1))
        expect(Math.abs(own.rateHzPerS - both)).toBeLessThan(allowed(f => f.rate))
      }
    }
  })
})
