import { describe, expect, it } from 'vitest'
import { createNeededFrequency, symbolClockPpm, symbolClockPpmAt } from '../../../shared/physics/doppler/needed'
import { receivedOverTransmitted } from '../../../shared/physics/doppler/ratio'
import { lookAt } from '../../../shared/physics/orbit/look'
import { gmstRad, siteStateTeme } from '../../../shared/physics/orbit/frames'
import type { Site, StateTeme } from '../../../shared/physics/types'
import { circularStates, EARTH_RADIUS_M, EARTH_RATE, meanMotion, siteOnSphere } from '../../support/circular-orbit'

const C = 299_792_458
const T0 = Date.UTC(2026, 10, 30, 6)
const RADIUS_500_KM = EARTH_RADIUS_M + 500e3
const TILT = 97.4 * Math.PI / 180

/** 500 km, 97.4°, at its highest latitude at T0, the station below it there. */
function highestLatitudePass(): { site: Site, stateAt: (utcMs: number) => StateTeme } {
  const stateAt = circularStates({ radiusM: RADIUS_500_KM, inclinationRad: TILT, nodeRad: 1, phaseRad: Math.PI / 2, epochMs: T0 })
  const [x, y, z] = stateAt(T0).positionM
  const site = siteOnSphere(Math.atan2(z, Math.hypot(x, y)), Math.atan2(y, x) - gmstRad(T0))
  return { site, stateAt }
}

describe('Doppler against closed forms', () => {
  it.each([[145e6, 52.9], [437e6, 159.3], [2200e6, 802], [8200e6, 2990]])('peaks at %d Hz by %d Hz/s over a station under the highest latitude', (carrierHz, expected) => {
    // Source: f·v²·R/((R+h)·h·c), plain mechanics; R 6378.137 km, h 500 km, v = (R+h)(n − ω cos i).
    const path = { ...highestLatitudePass(), ut1MinusUtcS: 0 }
    for (const direction of ['downlink', 'uplink'] as const) {
      const needed = createNeededFrequency({ ...path, direction, carrierHz })
      const rates = Array.from({ length: 81 }, (_, i) => needed.rateHzPerS(T0 + (i - 40) * 250))
      const steepest = direction === 'downlink' ? Math.min(...rates) : Math.max(...rates)
      expect(steepest / (direction === 'downlink' ? -expected : expected)).toBeCloseTo(1, 2)
      expect(Math.abs(Math.abs(steepest) / expected - 1)).toBeLessThan(0.003)
    }
  })

  it.each([[145e6, 3443], [437e6, 10377], [2200e6, 52243], [8200e6, 194724]])('at %d Hz starts from %d Hz at 0°', (carrierHz, expected) => {
    // Source: first order, f·v·R/((R+h)·c), plain mechanics.
    const { site, stateAt } = highestLatitudePass()
    const onHorizonS = Math.acos(EARTH_RADIUS_M / RADIUS_500_KM) / meanMotion(RADIUS_500_KM)
    const needed = createNeededFrequency({ site, stateAt, ut1MinusUtcS: 0, direction: 'downlink', carrierHz })
    expect(Math.abs(needed.dopplerHz(T0 - onHorizonS * 1000) / expected - 1)).toBeLessThan(0.003)
    expect(Math.abs(needed.dopplerHz(T0 + onHorizonS * 1000) / expected + 1)).toBeLessThan(0.003)
  })

  it.each([['receding', 7000, 10203.84], ['approaching', -7000, -10203.61]])('transmits at 437 MHz to a spacecraft %s at %d m/s by %d Hz off', (_, speedMps, expected) => {
    // Source: f·(√((1+β)/(1−β)) − 1), special relativity; the station at rest at the pole.
    const site: Site = { latitudeRad: Math.PI / 2, longitudeRad: 0, heightM: 0, minElevationRad: 0, mask: [] }
    const pole = siteStateTeme(site, T0, 0).positionM[2]
    const stateAt = (utcMs: number): StateTeme => ({
      positionM: [0, 0, pole + 1e6 + speedMps * (utcMs - T0) / 1000],
      velocityMps: [0, 0, speedMps],
    })
    const needed = createNeededFrequency({ site, stateAt, ut1MinusUtcS: 0, direction: 'uplink', carrierHz: 437e6 })
    expect(Math.abs(needed.dopplerHz(T0) - expected)).toBeLessThan(0.01)
    expect(Math.abs(needed.frequencyHz(T0) - 437e6 - expected)).toBeLessThan(0.01)
    const down = createNeededFrequency({ site, stateAt, ut1MinusUtcS: 0, direction: 'downlink', carrierHz: 437e6 })
    expect(Math.sign(down.dopplerHz(T0))).toBe(-Math.sign(expected))
  })

  it('has a second order of −3.2e-10 where nothing moves along the ray, 2.6 Hz at 8.2 GHz', () => {
    // Source: time dilation, −v²/2c², special relativity; the spacecraft passes over the pole, the station at rest.
    const stateAt = circularStates({ radiusM: RADIUS_500_KM, inclinationRad: Math.PI / 2, nodeRad: 0, phaseRad: Math.PI / 2, epochMs: T0 })
    const site: Site = { latitudeRad: Math.PI / 2, longitudeRad: 0, heightM: 0, minElevationRad: 0, mask: [] }
    const distance = RADIUS_500_KM - siteStateTeme(site, T0, 0).positionM[2]
    const heard = receivedOverTransmitted({ stateAt, site, ut1MinusUtcS: 0 }, 'downlink', T0 + distance / C * 1000)
    expect(heard.ratioMinusOne).toBeCloseTo(-3.22e-10, 12)
    expect(8.2e9 * heard.ratioMinusOne).toBeCloseTo(-2.64, 1)
    expect(heard.lightTimeS).toBeCloseTo(distance / C, 10)
  })

  it.each([30, 45, 60, 90])('follows the closed form for a circular orbit to half a percent through a pass that peaks near %d°', (peakDeg) => {
    // Source: Ali, Al-Dhahir, Hershey, IEEE Trans. Communications 46 (1998) 309, from memory.
    const site = siteOnSphere(0, 0.4)
    const up = siteStateTeme(site, T0, 0).positionM
    const nadirAngle = Math.acos(EARTH_RADIUS_M / RADIUS_500_KM * Math.cos(peakDeg * Math.PI / 180)) - peakDeg * Math.PI / 180
    const crossing = Math.atan2(up[1], up[0]) + nadirAngle / Math.sin(TILT)
    const stateAt = circularStates({ radiusM: RADIUS_500_KM, inclinationRad: TILT, nodeRad: crossing, phaseRad: 0, epochMs: T0 })
    const look = (t: number) => lookAt(stateAt(t), site, t, 0)
    let peakMs = T0
    for (let t = T0 - 60_000; t <= T0 + 60_000; t += 100) if (look(t).elevationRad > look(peakMs).elevationRad) peakMs = t

    const peak = look(peakMs).elevationRad
    expect(Math.abs(peak * 180 / Math.PI - peakDeg)).toBeLessThan(5)
    const g = Math.cos(Math.acos(EARTH_RADIUS_M / RADIUS_500_KM * Math.cos(peak)) - peak)
    const turning = meanMotion(RADIUS_500_KM) - EARTH_RATE * Math.cos(TILT)
    const closedForm = (t: number): number => {
      const angle = turning * (t - peakMs) / 1000
      const top = EARTH_RADIUS_M * RADIUS_500_KM * Math.sin(angle) * g * turning
      return -top / C / Math.sqrt(EARTH_RADIUS_M ** 2 + RADIUS_500_KM ** 2 - 2 * EARTH_RADIUS_M * RADIUS_500_KM * Math.cos(angle) * g)
    }
    const times = Array.from({ length: 141 }, (_, i) => peakMs + (i - 70) * 5000).filter(t => look(t).elevationRad > 0)
    const largest = Math.max(...times.map(t => Math.abs(closedForm(t))))
    expect(times.length).toBeGreaterThan(60)
    const needed = createNeededFrequency({ site, stateAt, ut1MinusUtcS: 0, direction: 'downlink', carrierHz: 437e6 })
    for (const t of times) {
      expect(Math.abs(-look(t).rangeRateMps / C - closedForm(t)) / largest).toBeLessThan(0.005)
      // The full shift differs from first order by light time: the rate times some milliseconds at most.
      expect(Math.abs(needed.dopplerHz(t) / 437e6 - closedForm(t)) / largest).toBeLessThan(0.006)
    }
  })

  it('counts the symbol clock in parts per million, up to 24 in low orbit', () => {
    const path = { ...highestLatitudePass(), ut1MinusUtcS: 0 }
    const onHorizonS = Math.acos(EARTH_RADIUS_M / RADIUS_500_KM) / meanMotion(RADIUS_500_KM)
    // Source: 10377 Hz of 437 MHz, first order.
    const ppm = symbolClockPpmAt(path, 'downlink', T0 - onHorizonS * 1000)
    expect(ppm).toBeCloseTo(10377 / 437, 1)
    expect(symbolClockPpm(1 + 23.7e-6)).toBeCloseTo(23.7, 6)
    expect(symbolClockPpm(receivedOverTransmitted(path, 'downlink', T0).ratio)).toBeCloseTo(symbolClockPpmAt(path, 'downlink', T0), 8)
  })
})
