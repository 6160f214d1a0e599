import { describe, expect, it } from 'vitest'
import { createNeededFrequency } from '../../../shared/physics/doppler/needed'
import { partialAlongTrackHzPerS, partialUt1HzPerS } from '../../../shared/physics/orbit/along-track'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { gmstRad } from '../../../shared/physics/orbit/frames'
import { propagatorOf, referenceDoppler } from '../../support/reference-data'
import { elementsFromLines, siteFromDegrees } from '../../support/reference-elements'
import { circularStates, EARTH_RADIUS_M, EARTH_RATE, meanMotion, siteOnSphere } from '../../support/circular-orbit'

const T0 = Date.UTC(2026, 10, 30, 6)
const reference = referenceDoppler().passes[0]!
const startMs = Date.parse(reference.windowStart) + reference.startS * 1000
const endMs = startMs + (reference.lightTimeDownS.length - 1) * reference.stepS * 1000

describe('the Doppler rate', () => {
  const site = siteFromDegrees(reference.station)
  const propagator = propagatorOf(elementsFromLines(reference.line1, reference.line2))
  const ephemeris = createEphemeris(propagator, startMs, endMs)
  const link = { stateAt: ephemeris.stateAt, site, ut1MinusUtcS: 0, direction: 'downlink' as const, carrierHz: 437.5e6 }
  const needed = createNeededFrequency(link)

  it('is the slope of the independent program\'s curve', () => {
    // Source: Skyfield's offsets (data/README.md), sixth-order differences of its 10 s samples; rounding and truncation
    // of those leave half a hertz per second at the steepest.
    const hz = reference.receivedMinusCarrierHz['437500000.0']!
    for (let k = 3; k < hz.length - 3; k++) {
      const slope = ((hz[k + 3]! - hz[k - 3]!) - 9 * (hz[k + 2]! - hz[k - 2]!) + 45 * (hz[k + 1]! - hz[k - 1]!)) / (60 * reference.stepS)
      expect(Math.abs(needed.rateHzPerS(startMs + k * reference.stepS * 1000) - slope)).toBeLessThan(0.5)
    }
  })

  it('is free of noise: below 1e-3 Hz/s from one 20 ms to the next', () => {
    const rates = Array.from({ length: 3000 }, (_, i) => needed.rateHzPerS(startMs + 300_000 + i * 20))
    for (let i = 1; i < rates.length - 1; i++) {
      expect(Math.abs(rates[i + 1]! - 2 * rates[i]! + rates[i - 1]!)).toBeLessThan(1e-3)
    }
  })

  it('sums up to the whole shift', () => {
    const steps = 2 * Math.round((endMs - startMs) / 1000)
    const h = (endMs - startMs) / steps
    let sum = 0
    for (let i = 0; i <= steps; i++) {
      const weight = i === 0 || i === steps ? 1 : i % 2 ? 4 : 2
      sum += weight * needed.rateHzPerS(startMs + i * h)
    }
    const hz = reference.receivedMinusCarrierHz['437500000.0']!
    // Simpson's rule against the independent program's own difference
    expect(Math.abs(sum * h / 3000 - (hz[hz.length - 1]! - hz[0]!))).toBeLessThan(0.1)
  })

  it('is known at the very ends of an ephemeris, and nothing is beyond them', () => {
    for (const edge of [ephemeris.fromMs, ephemeris.toMs]) {
      const wide = createNeededFrequency({ ...link, stateAt: createEphemeris(propagator, startMs - 60_000, endMs + 60_000).stateAt })
      expect(Math.abs(needed.rateHzPerS(edge) - wide.rateHzPerS(edge))).toBeLessThan(1e-3)
      expect(Math.abs(needed.dopplerHz(edge) - wide.dopplerHz(edge))).toBeLessThan(1e-3)
    }
    expect(() => needed.frequencyHz(ephemeris.toMs + 1)).toThrow(/within the ephemeris/)
    expect(() => needed.rateHzPerS(ephemeris.toMs + 5000)).toThrow(/within the ephemeris/)
  })
})

describe('the shares of timing and of UT1', () => {
  it.each(['downlink', 'uplink'] as const)('split the rate of the %s as orbit and Earth turn, over the equator', (direction) => {
    // Source: plain mechanics. On an equatorial circular orbit the shift depends on the angle between spacecraft and
    // station alone, which turns by n − ω: along-track n, UT1 ω, of the rate's n − ω.
    const radiusM = EARTH_RADIUS_M + 500e3
    const site = siteOnSphere(0, 0)
    const stateAt = circularStates({ radiusM, inclinationRad: 0, nodeRad: 0, phaseRad: gmstRad(T0), epochMs: T0 })
    const link = { stateAt, site, ut1MinusUtcS: 0, direction, carrierHz: 437e6 }
    const n = meanMotion(radiusM)
    for (const t of [T0, T0 + 20_000, T0 - 70_000]) {
      const rate = Math.abs(createNeededFrequency(link).rateHzPerS(t))
      expect(partialAlongTrackHzPerS(link, t) / rate / (n / (n - EARTH_RATE))).toBeCloseTo(1, 3)
      expect(partialUt1HzPerS(link, t) / rate / (EARTH_RATE / (n - EARTH_RATE))).toBeCloseTo(1, 3)
    }
  })

  it('leave nothing to UT1 at the pole', () => {
    const stateAt = circularStates({ radiusM: EARTH_RADIUS_M + 500e3, inclinationRad: 1.6, nodeRad: 0, phaseRad: 1.5, epochMs: T0 })
    const site = siteFromDegrees({ latitudeDeg: 90, longitudeDeg: 0, heightM: 0 })
    const link = { stateAt, site, ut1MinusUtcS: 0, direction: 'downlink' as const, carrierHz: 437e6 }
    expect(partialUt1HzPerS(link, T0)).toBeLessThan(1e-6)
    expect(partialAlongTrackHzPerS(link, T0)).toBeCloseTo(Math.abs(createNeededFrequency(link).rateHzPerS(T0)), 6)
  })
})
