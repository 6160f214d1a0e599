import { describe, expect, it } from 'vitest'
import { createNeededFrequency } from '../../../shared/physics/doppler/needed'
import { answeringLink, isTurnedAroundTo, returnedStepsHz, turnedAroundHz, twoWayOf } from '../../../shared/physics/doppler/two-way'
import { partialAlongTrackHzPerS, partialUt1HzPerS } from '../../../shared/physics/orbit/along-track'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { gmstRad, siteStateTeme } from '../../../shared/physics/orbit/frames'
import { directOffsetHz } from '../../../shared/physics/plan/check-curve'
import type { Site, StateTeme, Turnaround } from '../../../shared/physics/types'
import { circularStates, EARTH_RADIUS_M, EARTH_RATE, meanMotion, siteOnSphere } from '../../support/circular-orbit'
import { propagatorOf, referenceDoppler } from '../../support/reference-data'
import { elementsFromLines, siteFromDegrees } from '../../support/reference-elements'
import { oneWayReference, twoWayReference } from '../../support/two-way-reference'

const C = 299_792_458
const T0 = Date.UTC(2026, 10, 30, 6)
const sBand: Turnaround = { numerator: 240, denominator: 221, uplinkPrecompensated: false, uplinkHz: null }
const carrierHz = 2287.5e6

/** Straight up from the pole, where a station on the ground stands still. */
const pole: Site = { latitudeRad: Math.PI / 2, longitudeRad: 0, heightM: 0, minElevationRad: 0, mask: [] }
const radial = (speedMps: number) => (utcMs: number): StateTeme => ({
  positionM: [0, 0, siteStateTeme(pole, T0, 0).positionM[2] + 1e6 + speedMps * (utcMs - T0) / 1000],
  velocityMps: [0, 0, speedMps],
})

describe('a coherent transponder', () => {
  it('makes 2287.5 MHz of 2106.40625 MHz by 240/221', () => {
    // Source: CCSDS 401.0-B, frequencies of S-band transponders.
    expect(turnedAroundHz(2106.40625e6, sBand)).toBeCloseTo(2287.5e6, 6)
  })

  it('returns what its uplink is set off by, times 240/221', () => {
    // By hand: an uplink needed 100 Hz higher than it is set is heard 100 Hz low; 100 · 240/221 = 108.597.
    expect(returnedStepsHz(100, sBand)).toBeCloseTo(-108.597_285, 5)
    expect(returnedStepsHz(-221, sBand)).toBeCloseTo(240, 9)
  })

  it('has the one uplink that makes its carrier', () => {
    // Source: CCSDS 401.0-B, as above.
    const link = { carrierHz: 2287.5e6, turnaround: sBand }
    expect(isTurnedAroundTo(2106.40625e6, link)).toBe(true)
    expect(isTurnedAroundTo(2106.40625e6 + 10, link)).toBe(false)
    expect(isTurnedAroundTo(2106.40625e6, { carrierHz: 2287.5e6, turnaround: null })).toBe(false)
  })

  it.each([[-7000, 106_826], [7000, -106_821]])('at %d m/s shifts 2287.5 MHz by %d Hz two ways', (speedMps, expected) => {
    // Source: f·2β/(1 − β), β the speed of approach over c: relativistic Doppler twice, mechanics.
    const beta = -speedMps / C
    const needed = createNeededFrequency({ stateAt: radial(speedMps), site: pole, ut1MinusUtcS: 0, direction: 'downlink', carrierHz, turnaround: sBand })
    expect(Math.abs(needed.dopplerHz(T0) - expected)).toBeLessThan(1)
    expect(Math.abs(needed.dopplerHz(T0) - carrierHz * 2 * beta / (1 - beta))).toBeLessThan(0.01)
  })

  it('takes the light times both ways from where the station then was', () => {
    // Source: closed form. Met by the light at 1000 km less v·τ, c·τ away, on both legs: τ = 1000 km/(c + v).
    const { roundTripS } = twoWayOf({ stateAt: radial(7000), site: pole, ut1MinusUtcS: 0 }, T0)
    expect(Math.abs(roundTripS - 2 * 1e6 / (C + 7000))).toBeLessThan(1e-11)
  })

  it.each([[500e3, 1.7], [35_786e3, 0.2]])('loses by both legs what the round trip gains, over a station that turns with the Earth, from %d m', (heightM, inclinationRad) => {
    // Source: mechanics. One clock sends and receives, so received over sent is 1 − d(round trip)/dt, exactly; by five-point differences of the round trip.
    const path = { stateAt: circularStates({ radiusM: EARTH_RADIUS_M + heightM, inclinationRad, nodeRad: gmstRad(T0) + 0.1, phaseRad: 0.1, epochMs: T0 }), site: siteOnSphere(0.1, 0), ut1MinusUtcS: 0 }
    for (const t of [T0 - 120_000, T0, T0 + 60_000]) {
      const trip = (s: number) => twoWayOf(path, t + s * 1000).roundTripS
      const gained = (trip(-2) - 8 * trip(-1) + 8 * trip(1) - trip(2)) / 12
      const { upMinusOne, downMinusOne } = twoWayOf(path, t)
      expect(Math.abs(upMinusOne + downMinusOne + upMinusOne * downMinusOne + gained)).toBeLessThan(2e-12)
    }
  })

  it('shows the one-way shift only where its uplink is pre-compensated', () => {
    const compensated = createNeededFrequency({ stateAt: radial(-7000), site: pole, ut1MinusUtcS: 0, direction: 'downlink', carrierHz, turnaround: { ...sBand, uplinkPrecompensated: true } })
    // Source: f·(√((1+β)/(1−β)) − 1), special relativity.
    const beta = 7000 / C
    expect(Math.abs(compensated.dopplerHz(T0) - carrierHz * (Math.sqrt((1 + beta) / (1 - beta)) - 1))).toBeLessThan(0.01)
  })

  it('follows the uplink that it is given, by N over D', () => {
    const path = { stateAt: radial(-7000), site: pole, ut1MinusUtcS: 0, direction: 'downlink' as const, carrierHz }
    // 221 kHz up are 240 kHz down (arithmetic), shifted with all the rest.
    for (const uplinkPrecompensated of [true, false]) {
      const turnaround = { ...sBand, uplinkPrecompensated }
      const moved = createNeededFrequency({ ...path, turnaround: { ...turnaround, uplinkHz: 2106.40625e6 + 221_000 } })
      const usual = createNeededFrequency({ ...path, turnaround })
      const legs = uplinkPrecompensated ? 1 : 2
      expect(Math.abs(moved.frequencyHz(T0) - usual.frequencyHz(T0) - 240_000 * (1 + legs * 7000 / C))).toBeLessThan(0.01)
    }
  })
})

describe('both legs against an independent program', () => {
  const reference = referenceDoppler()
  it.each(reference.passes.map(pass => [pass.satellite, pass] as const))('agree for %s on every carrier', (_, pass) => {
    // Source: Skyfield 1.45 with python-sgp4 2.15 (data/README.md): what is received over what is sent down at t, and
    // what has to be sent over what is heard a round trip before. Each leg is good to 0.05 and 0.2 Hz; two and the
    // interpolation to 0.1, 0.4 and 1 Hz.
    const propagator = propagatorOf(elementsFromLines(pass.line1, pass.line2))
    const site = siteFromDegrees(pass.station)
    const startMs = Date.parse(pass.windowStart) + pass.startS * 1000
    const endMs = startMs + (pass.lightTimeDownS.length - 1) * pass.stepS * 1000
    const { stateAt } = createEphemeris(propagator, startMs, endMs)
    for (const [hz, tolerance] of [[437.5e6, 0.1], [2245e6, 0.4], [8200e6, 1]] as const) {
      const [received, twoWay] = [oneWayReference(pass, hz), twoWayReference(pass, hz)]
      const link = { stateAt, site, ut1MinusUtcS: 0, direction: 'downlink' as const, carrierHz: hz, turnaround: { ...sBand, numerator: 880, denominator: 749 } }
      const needed = createNeededFrequency(link)
      const compensated = createNeededFrequency({ ...link, turnaround: { ...link.turnaround, uplinkPrecompensated: true } })
      for (let k = 1; k < received.length; k++) {
        const atMs = startMs + k * pass.stepS * 1000
        const expected = twoWay[k]!
        expect(Math.abs(needed.dopplerHz(atMs) - expected), `${hz} sample ${k}`).toBeLessThan(tolerance)
        expect(Math.abs(directOffsetHz({ propagator, site, link, ut1MinusUtcS: 0 }, atMs) - expected), `${hz} sample ${k}`).toBeLessThan(tolerance)
        expect(Math.abs(compensated.dopplerHz(atMs) - received[k]!), `${hz} sample ${k}`).toBeLessThan(tolerance)
      }
    }
  })
})

describe('what a coherent link answers to errors by', () => {
  const radiusM = EARTH_RADIUS_M + 500e3
  const site = siteOnSphere(0, 0)
  const stateAt = circularStates({ radiusM, inclinationRad: 0, nodeRad: 0, phaseRad: gmstRad(T0), epochMs: T0 })
  const link = { stateAt, site, ut1MinusUtcS: 0, direction: 'downlink' as const, carrierHz }

  it.each([true, false])('is both legs, with the uplink pre-compensated: %s', (uplinkPrecompensated) => {
    // Source: plain mechanics. Over the equator the shift depends on the angle between spacecraft and station alone,
    // which turns by n − ω: a one-way rate times n/(n − ω) for the spacecraft's moving, ω/(n − ω) for the Earth's; two legs have it twice.
    const coherent = answeringLink({ ...link, turnaround: { ...sBand, uplinkPrecompensated } })
    const n = meanMotion(radiusM)
    for (const t of [T0, T0 + 20_000, T0 - 70_000]) {
      const rate = Math.abs(createNeededFrequency(link).rateHzPerS(t))
      expect(partialAlongTrackHzPerS(coherent, t) / rate / (n / (n - EARTH_RATE))).toBeCloseTo(2, 2)
      expect(partialUt1HzPerS(coherent, t) / rate / (EARTH_RATE / (n - EARTH_RATE))).toBeCloseTo(2, 2)
      expect(Math.abs(createNeededFrequency(coherent).rateHzPerS(t)) / rate).toBeCloseTo(2, 2)
    }
  })

  it('is an uplink sent for where the spacecraft was thought to be, heard where it is', () => {
    // Source: mechanics, leg by leg. Thought to be 50 ms further on than it is.
    const late = 0.05
    const t = T0 + 30_000
    const truth = twoWayOf(link, t)
    const thought = twoWayOf({ ...link, stateAt: at => stateAt(at + late * 1000) }, t)
    // Sent f/(1 + thought up); heard that times (1 + up); received times (1 + down), where (1 + thought down) was tuned to.
    const residualHz = carrierHz * ((1 + truth.upMinusOne) / (1 + thought.upMinusOne) * (1 + truth.downMinusOne) - (1 + thought.downMinusOne))
    const answer = partialAlongTrackHzPerS(answeringLink({ ...link, turnaround: { ...sBand, uplinkPrecompensated: true } }), t + late * 500)
    expect(Math.abs(residualHz) / late / answer).toBeCloseTo(1, 2)
  })

  it('is the link itself without a transponder, and where nothing is compensated', () => {
    const oneWay = { ...link, turnaround: null }
    const coherent = { ...link, turnaround: sBand }
    expect(answeringLink(oneWay)).toBe(oneWay)
    expect(answeringLink(coherent)).toBe(coherent)
  })
})
