import type { Site } from '../../shared/physics/types'

const A = 6378137
const F = 1 / 298.257223563
const TURN = 2 * Math.PI

/**
 * Elevation and azimuth from scratch, apart from the product's own frames: Earth rotation by the low-precision
 * sidereal time of the Astronomical Almanac (18.697374558 h + 24.06570982441908 h a day from J2000.0), the station in
 * inertial axes. Good to 1e-6 rad.
 */
export function elevationAzimuth(site: Site, position: readonly number[], utcMs: number): { elevation: number, azimuth: number } {
  const days = (utcMs - Date.UTC(2000, 0, 1, 12)) / 86_400_000
  const sidereal = ((18.697374558 + 24.06570982441908 * days) % 24) / 24 * TURN
  const local = sidereal + site.longitudeRad
  const [s, c] = [Math.sin(site.latitudeRad), Math.cos(site.latitudeRad)]
  const n = A / Math.sqrt(c * c + (1 - F) ** 2 * s * s)
  const d = [
    position[0]! - (n + site.heightM) * c * Math.cos(local),
    position[1]! - (n + site.heightM) * c * Math.sin(local),
    position[2]! - (n * (1 - F) ** 2 + site.heightM) * s,
  ]
  const length = Math.hypot(...d)
  const zenith = (d[0]! * c * Math.cos(local) + d[1]! * c * Math.sin(local) + d[2]! * s) / length
  const east = -d[0]! * Math.sin(local) + d[1]! * Math.cos(local)
  const north = -d[0]! * s * Math.cos(local) - d[1]! * s * Math.sin(local) + d[2]! * c
  return { elevation: Math.asin(zenith), azimuth: (Math.atan2(east, north) + TURN) % TURN }
}
