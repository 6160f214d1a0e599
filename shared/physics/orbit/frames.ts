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

/**
 * UT1 of an instant: UTC plus the dated setting UT1−UTC.
 *
 * @card UT1: the Earth’s own time at an instant of UTC.
 * @formula UT1 = UTC + (UT1−UTC)
 * @source IERS Conventions 2010 §5.5; the difference is a dated setting
 * @units UTC ms, s → UT1 ms
 * @frame none
 * @range |UT1−UTC| below 0.9 s
 * @tolerance 46.5 m at the equator for 0.1 s, to 0.05 m (orbit/frames.test.ts)
 */
export const ut1Of = (utcMs: UtcMs, ut1MinusUtcS: number): number => utcMs + ut1MinusUtcS * 1000

/**
 * Greenwich mean sidereal time, IAU 1982 (Aoki et al. 1982; Vallado 2013 eq. 3-47), rad in [0, 2π).
 * `ut1Ms`: milliseconds since 1970-01-01 on UT1. The whole turns of 876600 h a century are taken as a fraction of the
 * day, which keeps the angle to 1e-12 rad.
 *
 * @card Sidereal time: the angle by which the Earth has turned, Greenwich mean sidereal time of 1982.
 * @formula 67310.54841 + (876600·3600 + 8640184.812866)·T + 0.093104·T² − 6.2e-6·T³ seconds, T in Julian centuries of UT1 from J2000
 * @source Aoki et al. 1982; Vallado 2013 eq. 3-47
 * @units UT1 ms → rad in [0, 2π)
 * @frame TEME to Earth-fixed, about z
 * @range 1900 to 2100
 * @tolerance 1e-8 rad of handbook examples (orbit/frames.test.ts)
 */
export function gmstRad(ut1Ms: number): number {
  const days = (ut1Ms - J2000_MS) / 86_400_000
  const t = days / 36_525
  const seconds = 67_310.54841 + 86_400 * (days - Math.floor(days)) + (8_640_184.812866 + (0.093104 - 6.2e-6 * t) * t) * t
  const angle = (seconds * RAD_PER_SIDEREAL_SECOND) % TWO_PI
  return angle < 0 ? angle + TWO_PI : angle
}

/**
 * TEME to Earth-fixed axes at UT1: turned about z by GMST, without polar motion (at most 15 m). Any length unit.
 *
 * @card To the turning Earth: a vector of SGP4 in axes fixed to the Earth.
 * @formula r_ECEF = R₃(GMST)·r_TEME
 * @source Vallado 2013 §3.7
 * @units any, UT1 ms → the same
 * @frame TEME to Earth-fixed
 * @range polar motion left out, at most 15 m
 * @tolerance 1e-12 there and back; angles as in look angles (orbit/frames.test.ts)
 */
export function temeToEarthFixed(vector: Vec3<'TEME'>, ut1Ms: number): Vec3<'ECEF'> {
  return inAxesTurnedAboutZ(vector as readonly [number, number, number], gmstRad(ut1Ms))
}

/**
 * The reverse of `temeToEarthFixed`.
 *
 * @card From the turning Earth: a vector fixed to the Earth in the axes of SGP4.
 * @formula r_TEME = R₃(−GMST)·r_ECEF
 * @source Vallado 2013 §3.7
 * @units any, UT1 ms → the same
 * @frame Earth-fixed to TEME
 * @range polar motion left out, at most 15 m
 * @tolerance 1e-12 there and back (orbit/frames.test.ts)
 */
export function earthFixedToTeme(vector: Vec3<'ECEF'>, ut1Ms: number): Vec3<'TEME'> {
  return inAxesTurnedAboutZ(vector as readonly [number, number, number], -gmstRad(ut1Ms))
}

/**
 * Earth-fixed position (m) of a site given by WGS-84 geodetic coordinates; Vallado 2013 §3.2.
 *
 * @card Station: where a station given by geodetic coordinates stands.
 * @formula ((N + h)·cos φ·cos λ, (N + h)·cos φ·sin λ, (N(1 − e²) + h)·sin φ), N = a/√(1 − e² sin² φ)
 * @source Vallado 2013 §3.2; axes of WGS-84, NIMA TR8350.2
 * @units rad, rad, m above the ellipsoid → m
 * @frame Earth-fixed, WGS-84
 * @range all latitudes and longitudes; height of the antenna’s phase centre
 * @tolerance 0.1 mm of the ellipsoid’s axes (orbit/frames.test.ts)
 */
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

/**
 * Position and local unit vectors of a site, Earth-fixed; up is the ellipsoid's normal. Kept by site object.
 *
 * @card Station’s axes: east, north and up at a station.
 * @formula up = (cos φ cos λ, cos φ sin λ, sin φ), east = ∂up/∂λ over cos φ, north = up × east
 * @source Vallado 2013 §3.4
 * @units rad → unit vectors, m
 * @frame Earth-fixed, WGS-84; up is the ellipsoid’s normal
 * @range all latitudes; at a pole east is as at its meridian
 * @tolerance 0.0005° in azimuth and elevation (orbit/reference-passes.test.ts)
 */
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

/**
 * Position (m) and velocity ω×r (m/s) of a site in TEME axes, taken as not rotating.
 *
 * @card Moving station: position and velocity of a station carried by the Earth.
 * @formula r = R₃(−GMST)·r_site, v = ω×r, ω = 2π·1.002737909350795/86400 s
 * @source mechanics; rate from Aoki et al. 1982
 * @units rad, m, UTC ms, s → m, m/s
 * @frame TEME axes, taken as not turning
 * @range |UT1−UTC| below 0.9 s; polar motion left out
 * @tolerance 465.1 m/s at the equator to 0.05 m/s (orbit/frames.test.ts)
 */
export function siteStateTeme(site: Site, utcMs: UtcMs, ut1MinusUtcS: number): StateTeme {
  const positionM = earthFixedToTeme(siteAxes(site).positionM, ut1Of(utcMs, ut1MinusUtcS))
  return {
    positionM,
    velocityMps: [-EARTH_ROTATION_RAD_PER_S * positionM[1], EARTH_ROTATION_RAD_PER_S * positionM[0], 0],
  }
}
