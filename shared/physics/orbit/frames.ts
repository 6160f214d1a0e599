import type { Site, StateTeme, UtcMs, Vec3 } from '../types'
import { inAxesTurnedAboutZ } from './vector'

const J2000_MS = Date.UTC(2000, 0, 1, 12)
const RAD_PER_SIDEREAL_SECOND = 2 * Math.PI / 86_400
const TWO_PI = 2 * Math.PI

/**
 * Rotation of the Earth against the mean equinox, rad per second of UT1: the rate of `gmstRad` at J2000
 * (2π · 1.002737909350795 / 86400; Aoki et al. 1982, Vallado 2013 §3.5). It drifts by 5e-17 relative a day.
 */
export const EARTH_ROTATION_RAD_PER_S = TWO_PI * 1.002737909350795 / 86_400

/** WGS-84 (NIMA TR8350.2): semi-major axis and flattening. */
export const WGS84_RADIUS_M = 6_378_137
export const WGS84_FLATTENING = 1 / 298.257223563
const WGS84_E2 = WGS84_FLATTENING * (2 - WGS84_FLATTENING)

/** UT1 of an instant: UTC plus the dated setting UT1−UTC. */
export const ut1Of = (utcMs: UtcMs, ut1MinusUtcS: number): number => utcMs + ut1MinusUtcS * 1000

/**
 * Greenwich mean sidereal time, IAU 1982 (Aoki et al. 1982; Vallado 2013 eq. 3-47), rad in [0, 2π).
 * `ut1Ms`: milliseconds since 1970-01-01 on UT1. The whole turns of 876600 h a century are taken as a fraction of the
 * day, which keeps the angle to 1e-12 rad.
 */
export function gmstRad(ut1Ms: number): number {
  const days = (ut1Ms - J2000_MS) / 86_400_000
  const t = days / 36_525
  const seconds = 67_310.54841 + 86_400 * (days - Math.floor(days)) + (8_640_184.812866 + (0.093104 - 6.2e-6 * t) * t) * t
  const angle = (seconds * RAD_PER_SIDEREAL_SECOND) % TWO_PI
  return angle < 0 ? angle + TWO_PI : angle
}

/** TEME to Earth-fixed axes at UT1: turned about z by GMST, without polar motion (at most 15 m). Any length unit. */
export function temeToEarthFixed(vector: Vec3<'TEME'>, ut1Ms: number): Vec3<'ECEF'> {
  return inAxesTurnedAboutZ(vector as readonly [number, number, number], gmstRad(ut1Ms))
}

/** The reverse of `temeToEarthFixed`. */
export function earthFixedToTeme(vector: Vec3<'ECEF'>, ut1Ms: number): Vec3<'TEME'> {
  return inAxesTurnedAboutZ(vector as readonly [number, number, number], -gmstRad(ut1Ms))
}

/** Earth-fixed position (m) of a site given by WGS-84 geodetic coordinates; Vallado 2013 §3.2. */
export function sitePosition(site: Site): Vec3<'ECEF'> {
  const sinLatitude = Math.sin(site.latitudeRad)
  const cosLatitude = Math.cos(site.latitudeRad)
  const primeVertical = WGS84_RADIUS_M / Math.sqrt(1 - WGS84_E2 * sinLatitude * sinLatitude)
  const fromAxis = (primeVertical + site.heightM) * cosLatitude
  return [
    fromAxis * Math.cos(site.longitudeRad),
    fromAxis * Math.sin(site.longitudeRad),
    (primeVertical * (1 - WGS84_E2) + site.heightM) * sinLatitude,
  ]
}

export interface SiteAxes {
  readonly positionM: Vec3<'ECEF'>
  readonly east: Vec3<'ECEF'>
  readonly north: Vec3<'ECEF'>
  readonly up: Vec3<'ECEF'>
}

const axesOfSites = new WeakMap<Site, SiteAxes>()

/** Position and local unit vectors of a site, Earth-fixed; up is the ellipsoid's normal. Kept by site object. */
export function siteAxes(site: Site): SiteAxes {
  const known = axesOfSites.get(site)
  if (known) return known
  const [sinLat, cosLat] = [Math.sin(site.latitudeRad), Math.cos(site.latitudeRad)]
  const [sinLon, cosLon] = [Math.sin(site.longitudeRad), Math.cos(site.longitudeRad)]
  const axes: SiteAxes = {
    positionM: sitePosition(site),
    east: [-sinLon, cosLon, 0],
    north: [-sinLat * cosLon, -sinLat * sinLon, cosLat],
    up: [cosLat * cosLon, cosLat * sinLon, sinLat],
  }
  axesOfSites.set(site, axes)
  return axes
}

/** Position (m) and velocity ω×r (m/s) of a site in TEME axes, taken as not rotating. */
export function siteStateTeme(site: Site, utcMs: UtcMs, ut1MinusUtcS: number): StateTeme {
  const positionM = earthFixedToTeme(siteAxes(site).positionM, ut1Of(utcMs, ut1MinusUtcS))
  return {
    positionM,
    velocityMps: [-EARTH_ROTATION_RAD_PER_S * positionM[1], EARTH_ROTATION_RAD_PER_S * positionM[0], 0],
  }
}
