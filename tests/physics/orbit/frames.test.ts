import { describe, expect, it } from 'vitest'
import { EARTH_ROTATION_RAD_PER_S, earthFixedToTeme, gmstRad, sitePosition, siteStateTeme, temeToEarthFixed } from '../../../shared/physics/orbit/frames'
import { RAD, siteFromDegrees } from '../../support/reference-elements'

const hours = (h: number, m: number, s: number): number => (h + m / 60 + s / 3600) * 15 * RAD

describe('frames', () => {
  it.each([
    // Meeus, Astronomical Algorithms, examples 12.a and 12.b (given to 0.0001 s of time)
    ['1987-04-10T00:00:00Z', hours(13, 10, 46.3668)],
    ['1987-04-10T19:21:00Z', hours(8, 34, 57.0896)],
    // Vallado, Fundamentals of Astrodynamics, example 3-5
    ['1992-08-20T12:14:00Z', 152.578787810 * RAD],
  ])('gives Greenwich mean sidereal time of %s as handbooks do', (instant, expected) => {
    expect(Math.abs(gmstRad(Date.parse(instant)) - expected)).toBeLessThan(1e-8)
  })

  it('turns at the rate of WGS-84 but for precession', () => {
    const day = 86_400_000
    const t = Date.UTC(2026, 10, 30)
    const turned = gmstRad(t + day / 8) - gmstRad(t)
    expect(((turned + 2 * Math.PI) % (2 * Math.PI)) / 10_800).toBeCloseTo(EARTH_ROTATION_RAD_PER_S, 13)
    // 7.2921151467e-5 (WGS-84, NIMA TR8350.2) plus precession in right ascension, 7.09e-12 rad/s
    expect(EARTH_ROTATION_RAD_PER_S).toBeCloseTo(7.2921151467e-5 + 7.09e-12, 14)
  })

  it.each([
    // Axes of WGS-84 (NIMA TR8350.2); 45° from memory, it follows from the same axes
    [0, 0, 0, [6_378_137, 0, 0]],
    [90, 0, 0, [0, 0, 6_356_752.3142]],
    [45, 0, 0, [4_517_590.8788, 0, 4_487_348.4089]],
    [0, 90, 1000, [0, 6_379_137, 0]],
  ])('puts latitude %d°, longitude %d°, height %d m where WGS-84 does', (latitudeDeg, longitudeDeg, heightM, expected) => {
    const position = sitePosition(siteFromDegrees({ latitudeDeg, longitudeDeg, heightM }))
    expected.forEach((value, i) => expect(Math.abs(position[i]! - value)).toBeLessThan(1e-4))
  })

  it('rotates eastwards, and back to where it was', () => {
    const t = Date.UTC(2026, 10, 30)
    const site = siteFromDegrees({ latitudeDeg: 0, longitudeDeg: 0, heightM: 0 })
    const { positionM, velocityMps } = siteStateTeme(site, t, 0)
    // Greenwich lies at right ascension GMST; 465.1 m/s at the equator is a handbook value.
    expect(Math.atan2(positionM[1], positionM[0])).toBeCloseTo(Math.atan2(Math.sin(gmstRad(t)), Math.cos(gmstRad(t))), 12)
    expect(positionM[0] * velocityMps[1] - positionM[1] * velocityMps[0]).toBeGreaterThan(0)
    expect(Math.hypot(...velocityMps)).toBeCloseTo(465.1, 1)
    earthFixedToTeme(temeToEarthFixed([1, 2, 3], t), t).forEach((value, i) => expect(value).toBeCloseTo(i + 1, 12))
  })

  it('moves a site at the equator by 47 m for 0.1 s of UT1', () => {
    const site = siteFromDegrees({ latitudeDeg: 0, longitudeDeg: 77, heightM: 0 })
    const t = Date.UTC(2026, 10, 30)
    const [a, b] = [siteStateTeme(site, t, 0).positionM, siteStateTeme(site, t, 0.1).positionM]
    // 465.1 m/s times 0.1 s
    expect(Math.hypot(a[0] - b[0], a[1] - b[1])).toBeCloseTo(46.51, 1)
  })
})
