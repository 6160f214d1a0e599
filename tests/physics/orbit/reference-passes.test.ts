import { describe, expect, it } from 'vitest'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { lookAt } from '../../../shared/physics/orbit/look'
import { findPasses } from '../../../shared/physics/orbit/passes'
import { propagatorOf, referencePasses } from '../../support/reference-data'
import { elementsFromLines, RAD, siteFromDegrees } from '../../support/reference-elements'

// Source: Skyfield 1.45 with python-sgp4 2.15, UT1 = UTC, bisected; cross-checked with ERFA (data/README.md).
const CROSSING_TOLERANCE_S = 0.002
const ELEVATION_TOLERANCE_DEG = 0.0005
const RANGE_TOLERANCE_M = 1
const RANGE_RATE_TOLERANCE_MPS = 0.01
/** The reference gives culminations by its own search; flat maxima of high orbits leave a second. */
const CULMINATION_TOLERANCE_S = 2

const reference = referencePasses()
const ephemerides = new Map(reference.satellites.map((satellite) => {
  const fromMs = Date.parse(satellite.windowStart)
  const toMs = fromMs + satellite.windowDays * 86_400_000
  const ephemeris = createEphemeris(propagatorOf(elementsFromLines(satellite.line1, satellite.line2)), fromMs, toMs)
  return [satellite.id, { fromMs, toMs, ephemeris }] as const
}))

const combinations = reference.satellites.flatMap(satellite => reference.stations.flatMap(station =>
  [0, 5, 10].map(minElevationDeg => [satellite.id, station.id, minElevationDeg] as const)))

describe('passes against an independent program', () => {
  it.each(combinations)('finds every pass of %s over %s above %i° and none besides', (satelliteId, stationId, minElevationDeg) => {
    const { fromMs, toMs, ephemeris } = ephemerides.get(satelliteId)!
    const site = siteFromDegrees(reference.stations.find(station => station.id === stationId)!, minElevationDeg)
    const expected = reference.passes.filter(pass =>
      pass.satellite === satelliteId && pass.station === stationId && pass.minElevationDeg === minElevationDeg)

    const { passes } = findPasses({ ephemeris, site, fromMs, toMs, ut1MinusUtcS: 0 })

    expect(passes.map(pass => [pass.aosClipped, pass.losClipped]))
      .toEqual(expected.map(pass => [pass.aosClipped, pass.losClipped]))
    passes.forEach((pass, i) => {
      const other = expected[i]!
      const edges = [[pass.aosMs, other.aosS], [pass.losMs, other.losS]] as const
      for (const [ownMs, referenceS] of edges) {
        const late = Math.abs((ownMs - fromMs) / 1000 - referenceS)
        if (late <= CROSSING_TOLERANCE_S) continue
        // Grazing: milliseconds of time mean nothing, the elevation at the reference's instant counts.
        const atMs = fromMs + referenceS * 1000
        const state = ephemeris.propagator.at(atMs)
        if (!state.ok) throw new Error(state.error)
        const elevationDeg = lookAt(state, site, atMs, 0).elevationRad / RAD
        expect(Math.abs(elevationDeg - minElevationDeg), `crossing at ${referenceS} s, ${late} s apart`).toBeLessThan(ELEVATION_TOLERANCE_DEG)
      }
      expect(Math.abs(pass.maxElevationRad / RAD - other.maxElevationDeg)).toBeLessThan(ELEVATION_TOLERANCE_DEG)
      expect(Math.abs((pass.culminationMs - fromMs) / 1000 - other.culminationS)).toBeLessThan(CULMINATION_TOLERANCE_S)
    })
  })

  it('sees azimuth, elevation, range and range rate as the independent program does', () => {
    let compared = 0
    for (const pass of reference.passes) {
      if (!pass.samples) continue
      const { fromMs, ephemeris } = ephemerides.get(pass.satellite)!
      const site = siteFromDegrees(reference.stations.find(station => station.id === pass.station)!)
      pass.samples.azimuthDeg.forEach((azimuthDeg, k) => {
        const atMs = fromMs + (pass.samples!.startS + k * pass.samples!.stepS) * 1000
        const look = lookAt(ephemeris.stateAt(atMs)!, site, atMs, 0)
        const turn = Math.abs(look.azimuthRad / RAD - azimuthDeg)
        // Near the zenith an azimuth is as loose as the cosine of the elevation is small.
        const across = Math.min(turn, 360 - turn) * Math.cos(look.elevationRad)
        expect(across).toBeLessThan(ELEVATION_TOLERANCE_DEG)
        expect(Math.abs(look.elevationRad / RAD - pass.samples!.elevationDeg[k]!)).toBeLessThan(ELEVATION_TOLERANCE_DEG)
        expect(Math.abs(look.rangeM - pass.samples!.rangeM[k]!)).toBeLessThan(RANGE_TOLERANCE_M)
        expect(Math.abs(look.rangeRateMps - pass.samples!.rangeRateMps[k]!)).toBeLessThan(RANGE_RATE_TOLERANCE_MPS)
        compared++
      })
    }
    expect(compared).toBeGreaterThan(5000)
  })
})
