import { createPropagator } from '../physics/orbit/propagator'
import { gmstRad, sitePosition } from '../physics/orbit/frames'
import type { MeanElements, Propagator, Site, StateTeme, UtcMs } from '../physics/types'

/** Orbits and stations that the values from outside speak of. */

const RAD = Math.PI / 180
const unnamed = { name: null, catalogueNumber: null, designator: null, classification: 'U', elementSetNumber: null, revolutionAtEpoch: null }

/** Object 00005 of the published verification run. */
export const object00005: MeanElements = {
  ...unnamed, catalogueNumber: '00005', epochUtcUs: 962_131_819_733_568, meanMotionRevPerDay: 10.82419157, eccentricity: 0.1859667, inclinationDeg: 34.2682,
  raanDeg: 348.7242, argPericenterDeg: 331.7664, meanAnomalyDeg: 19.3264, bstar: 0.28098e-4, meanMotionDot: 2.3e-7, meanMotionDdot: 0,
}

/** An invented orbit at 500 km, of the reference data. */
export const invented500: MeanElements = {
  ...unnamed, epochUtcUs: 1_796_041_066_665_888, meanMotionRevPerDay: 15.21987654, eccentricity: 0.0012345, inclinationDeg: 97.4021,
  raanDeg: 45.1234, argPericenterDeg: 87.6543, meanAnomalyDeg: 272.5678, bstar: 0.31234e-3, meanMotionDot: 8.123e-5, meanMotionDdot: 0,
}

export const siteAt = (latitudeDeg: number, longitudeDeg: number, heightM: number, minElevationDeg = 0): Site => ({
  latitudeRad: latitudeDeg * RAD, longitudeRad: longitudeDeg * RAD, heightM, minElevationRad: minElevationDeg * RAD, mask: [],
})

export const DAY_MS = Date.UTC(2026, 11, 1)
export const southern = siteAt(-42.805, 147.44, 40, 5)
export const northern = siteAt(48.15, 11.28, 600)
export const pole = siteAt(90, 0, 0)

export function propagatorFor(elements: MeanElements): Propagator {
  const made = createPropagator(elements)
  if (!made.ok) throw new Error(`The example’s elements fail: ${made.error}`)
  return made.propagator
}

export const R_M = 6_378_137
export const RADIUS_500_M = R_M + 500e3
/** rad/s, WGS-84. */
export const EARTH_RATE = 7.292115e-5
export const meanMotion = (radiusM: number): number => Math.sqrt(398_600.4418e9 / radiusM ** 3)
export const TILT = 97.4 * RAD
export const T0 = Date.UTC(2026, 10, 30, 6)

/** States on a circular orbit at 500 km by plain mechanics, `phaseRad` from the node at `T0`. */
export function circular(inclinationRad: number, nodeRad: number, phaseRad: number): (utcMs: UtcMs) => StateTeme {
  const n = meanMotion(RADIUS_500_M)
  const point = (angle: number, size: number): [number, number, number] => {
    const [along, across] = [size * Math.cos(angle), size * Math.sin(angle)]
    const flat = across * Math.cos(inclinationRad)
    return [along * Math.cos(nodeRad) - flat * Math.sin(nodeRad), along * Math.sin(nodeRad) + flat * Math.cos(nodeRad), across * Math.sin(inclinationRad)]
  }
  return (utcMs) => {
    const angle = phaseRad + n * (utcMs - T0) / 1000
    return { positionM: point(angle, RADIUS_500_M), velocityMps: point(angle + Math.PI / 2, RADIUS_500_M * n) }
  }
}

/** A site at a geocentric latitude on a sphere of the equator's radius: for formulas that hold on a sphere. */
export function siteOnSphere(latitudeRad: number, longitudeRad: number): Site {
  let [geodetic, heightM] = [latitudeRad, 0]
  const here = (): Site => ({ latitudeRad: geodetic, longitudeRad, heightM, minElevationRad: 0, mask: [] })
  for (let round = 0; round < 12; round++) {
    const [x, y, z] = sitePosition(here())
    geodetic += latitudeRad - Math.atan2(z, Math.hypot(x, y))
    heightM += R_M - Math.hypot(x, y, z)
  }
  return here()
}

/** The orbit at its highest latitude at `T0`, the station under it there; both turn one way, so the closed forms hold. */
export function overhead(): { readonly stateAt: (utcMs: UtcMs) => StateTeme, readonly site: Site, readonly ut1MinusUtcS: number } {
  const stateAt = circular(TILT, 1, Math.PI / 2)
  const [x, y, z] = stateAt(T0).positionM
  return { stateAt, site: siteOnSphere(Math.atan2(z, Math.hypot(x, y)), Math.atan2(y, x) - gmstRad(T0)), ut1MinusUtcS: 0 }
}

/** From culmination to 0°, s, on an orbit overhead. */
export const toHorizonS = Math.acos(R_M / RADIUS_500_M) / meanMotion(RADIUS_500_M)
