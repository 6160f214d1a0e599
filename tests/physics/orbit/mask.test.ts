import { describe, expect, it } from 'vitest'
import { horizonRad } from '../../../shared/physics/orbit/mask'
import { RAD, siteFromDegrees } from '../../support/reference-elements'

// Source: linear interpolation, worked by hand.
const place = { latitudeDeg: 48, longitudeDeg: 11, heightM: 600 }
const horizonDeg = (mask: readonly (readonly [number, number])[], azimuthDeg: number, minDeg = 0, linkDeg?: number): number =>
  horizonRad(siteFromDegrees(place, minDeg, mask), azimuthDeg * RAD, linkDeg === undefined ? undefined : linkDeg * RAD) / RAD

describe('the horizon mask', () => {
  it.each([
    [90, 10], [100, 12], [180, 28], [270, 10], [225, 19],
  ])('is linear between its points: at %d° it stands at %d°', (azimuth, expected) => {
    expect(horizonDeg([[90, 10], [180, 28], [270, 10], [300, 0], [60, 0]], azimuth)).toBeCloseTo(expected, 9)
  })

  it.each([[350, 10], [355, 12.5], [0, 15], [360, 15], [5, 17.5], [10, 20], [-5, 12.5]])('is linear across north: at %d° it stands at %d°', (azimuth, expected) => {
    expect(horizonDeg([[10, 20], [350, 10]], azimuth)).toBeCloseTo(expected, 9)
  })

  it('comes back round the south between two points at either side of north', () => {
    expect(horizonDeg([[10, 20], [350, 10]], 180)).toBeCloseTo(15, 9)
  })

  it('holds all round with one point, and takes points in any order and turn', () => {
    expect([0, 90, 200, 359.9].map(azimuth => horizonDeg([[123, 7]], azimuth))).toEqual([7, 7, 7, 7].map(value => expect.closeTo(value, 9)))
    expect(horizonDeg([[180, 20], [-90, 10], [360, 0]], 225)).toBeCloseTo(15, 9)
  })

  it('takes the higher side of a step', () => {
    expect(horizonDeg([[90, 5], [90, 30], [200, 30]], 90)).toBeCloseTo(30, 9)
    expect(horizonDeg([[90, 30], [90, 5], [200, 5]], 90)).toBeCloseTo(30, 9)
  })

  it('gives way to the larger of the minimum elevations of site and link', () => {
    expect(horizonDeg([[0, 3], [180, 3]], 90, 5)).toBeCloseTo(5, 9)
    expect(horizonDeg([[0, 3], [180, 3]], 90, 5, 8)).toBeCloseTo(8, 9)
    expect(horizonDeg([[0, 30], [180, 30]], 90, 5, 8)).toBeCloseTo(30, 9)
    expect(horizonDeg([], 90, 5, 2)).toBeCloseTo(5, 9)
  })
})
