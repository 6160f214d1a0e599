import { sitePosition } from '../../shared/physics/orbit/frames'
import type { Site, StateTeme } from '../../shared/physics/types'

const EARTH_GM = 398_600.4418e9 // m³/s², EGM-96

export const EARTH_RADIUS_M = 6_378_137
export const EARTH_RATE = 7.292115e-5 // rad/s, WGS-84

export interface CircularOrbit {
  readonly radiusM: number
  readonly inclinationRad: number
  /** Right ascension of the ascending node, and angle from it at `epochMs`. */
  readonly nodeRad: number
  readonly phaseRad: number
  readonly epochMs: number
}

export const meanMotion = (radiusM: number): number => Math.sqrt(EARTH_GM / radiusM ** 3)

/** States on a circular orbit by plain mechanics, in axes that do not rotate. */
export function circularStates(orbit: CircularOrbit): (utcMs: number) => StateTeme {
  const n = meanMotion(orbit.radiusM)
  const [cosNode, sinNode] = [Math.cos(orbit.nodeRad), Math.sin(orbit.nodeRad)]
  const [cosTilt, sinTilt] = [Math.cos(orbit.inclinationRad), Math.sin(orbit.inclinationRad)]
  const inPlane = (angle: number): [number, number, number] => {
    const [along, across] = [Math.cos(angle), Math.sin(angle)]
    return [along * cosNode - across * sinNode * cosTilt, along * sinNode + across * cosNode * cosTilt, across * sinTilt]
  }
  return (utcMs) => {
    const angle = orbit.phaseRad + n * (utcMs - orbit.epochMs) / 1000
    const [x, y, z] = inPlane(angle)
    const [vx, vy, vz] = inPlane(angle + Math.PI / 2)
    const [r, v] = [orbit.radiusM, orbit.radiusM * n]
    return { positionM: [r * x, r * y, r * z], velocityMps: [v * vx, v * vy, v * vz] }
  }
}

/** A site at a geocentric latitude and distance: for formulas that hold on a sphere. */
export function siteOnSphere(latitudeRad: number, longitudeRad: number, radiusM = EARTH_RADIUS_M): Site {
  const site = { latitudeRad, longitudeRad, heightM: 0, minElevationRad: 0, mask: [] }
  for (let round = 0; round < 12; round++) {
    const [x, y, z] = sitePosition(site)
    const distance = Math.hypot(x, y, z)
    site.latitudeRad += latitudeRad - Math.atan2(z, Math.hypot(x, y))
    site.heightM += radiusM - distance
  }
  return site
}
