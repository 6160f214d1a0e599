import { describe, expect, it } from 'vitest'
import { alongTrackSigmaS, meanSpeedMps, perigeeHeightKm, perigeeSpeedMps, priorFor } from '../../../shared/physics/accuracy/prior'

const prior = { lowFloorKm: 0.5, lowGrowthKmPerDay: 1.5, highFloorKm: 0.3, highGrowthKmPerDay: 0.5 }
const orbit = (meanMotionRevPerDay: number, eccentricity: number) => ({ meanMotionRevPerDay, eccentricity })

describe('the along-track prior', () => {
  // Handbook values: geostationary 35 786 km and 3.075 km/s; 500 km circular 94.6 min and 7.61 km/s; Molniya perigee about 10 km/s (common practice).
  it('knows height and speed of orbits that every handbook has', () => {
    expect(perigeeHeightKm(orbit(1.00273791, 0))).toBeCloseTo(35_786, -1)
    expect(meanSpeedMps(orbit(1.00273791, 0)) / 1000).toBeCloseTo(3.075, 2)
    expect(Math.abs(perigeeHeightKm(orbit(1440 / 94.62, 0)) - 500)).toBeLessThan(3)
    expect(meanSpeedMps(orbit(1440 / 94.62, 0)) / 1000).toBeCloseTo(7.61, 2)
    expect(perigeeSpeedMps(orbit(2.00613, 0.7222)) / 1000).toBeCloseTo(9.8, 0)
  })

  // Vis-viva at the perigee of a circular orbit is its mean speed (mechanics).
  it('has one speed on a circle', () => {
    expect(perigeeSpeedMps(orbit(15.2, 0))).toBeCloseTo(meanSpeedMps(orbit(15.2, 0)), 6)
  })

  it('is chosen by the height of the perigee, not of the orbit', () => {
    expect(priorFor(orbit(15.2, 0.001), prior)).toEqual({ floorKm: 0.5, growthKmPerDay: 1.5 })
    expect(priorFor(orbit(13, 0.001), prior)).toEqual({ floorKm: 0.3, growthKmPerDay: 0.5 })
    expect(priorFor(orbit(2.00613, 0.74), prior)).toEqual({ floorKm: 0.5, growthKmPerDay: 1.5 })
  })

  // 0.5 km + 1.5 km/day over two days at 7000 m/s: 3500 m / 7000 m/s = 0.5 s, on either side of the epoch (arithmetic).
  it('grows with the age from the epoch, either way', () => {
    const sigma = alongTrackSigmaS({ floorKm: 0.5, growthKmPerDay: 1.5, epochMs: 1e12, speedMps: 7000 })
    expect(sigma(1e12 + 2 * 86_400_000)).toBeCloseTo(0.5, 12)
    expect(sigma(1e12 - 2 * 86_400_000)).toBeCloseTo(0.5, 12)
    expect(sigma(1e12)).toBeCloseTo(500 / 7000, 12)
  })
})
