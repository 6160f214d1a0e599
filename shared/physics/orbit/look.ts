import type { Look, Site, StateTeme, UtcMs } from '../types'
import { EARTH_ROTATION_RAD_PER_S, siteAxes, temeToEarthFixed, ut1Of } from './frames'
import type { SiteTrack } from './site-track'
import { EAST, EAST_RATE, NORTH, NORTH_RATE, UP, UP_RATE } from './site-track'
import { dot, minus, norm, type Triple } from './vector'

/**
 * Azimuth (from true north, clockwise, [0, 2π)), geometric elevation without refraction, range and range rate of a
 * spacecraft from a site at one instant.
 *
 * Range rate = (r − r_site)·(v − ω×r)/|r − r_site| in Earth-fixed axes, v rotated; positive when receding
 * (plain mechanics). Geometric: no light time. Within 0.0005°, 1 m and 0.01 m/s of independent programs.
 *
 * @card Look angles and range rate: where a spacecraft stands as seen from a station, and how fast it recedes.
 * @formula ρ̇ = (r − r_s)·(v − ω×r)/|r − r_s|; azimuth = atan2(east, north); elevation = atan2(up, √(east² + north²))
 * @source mechanics; axes of the station: Vallado 2013 §4.4
 * @units m, m/s, UTC ms, s → rad, m, m/s
 * @frame TEME in; out in the station’s horizon of WGS-84, azimuth from true north clockwise
 * @range elevation geometric, without refraction; no light time; range above 0
 * @tolerance 0.0005°, 1 m and 0.01 m/s of an independent program (orbit/reference-passes.test.ts)
 */
export function lookAt(state: StateTeme, site: Site, utcMs: UtcMs, ut1MinusUtcS: number): Look {
  const ut1Ms = ut1Of(utcMs, ut1MinusUtcS)
  const position = temeToEarthFixed(state.positionM, ut1Ms) as Triple
  const inertial = temeToEarthFixed(state.velocityMps, ut1Ms) as Triple
  const velocity: Triple = [
    inertial[0] + EARTH_ROTATION_RAD_PER_S * position[1],
    inertial[1] - EARTH_ROTATION_RAD_PER_S * position[0],
    inertial[2],
  ]
  const axes = siteAxes(site)
  const line = minus(position, axes.positionM as Triple)
  const rangeM = norm(line)
  const east = dot(line, axes.east as Triple)
  const north = dot(line, axes.north as Triple)
  const azimuthRad = Math.atan2(east, north)
  return {
    azimuthRad: azimuthRad < 0 ? azimuthRad + 2 * Math.PI : azimuthRad,
    elevationRad: Math.atan2(dot(line, axes.up as Triple), Math.hypot(east, north)),
    rangeM,
    rangeRateMps: dot(line, velocity) / rangeM,
  }
}

/**
 * The same from a track's view (site-track.ts). The site's own motion is to the east: (r − r_site)·(ω×(r − r_site)) is nothing.
 *
 * @card Look angles and range rate, from a view: the same in the station’s own axes.
 * @formula ρ̇ = (e·(v_e − v_s) + n·v_n + u·v_u)/ρ, v_s the station’s speed to the east
 * @source mechanics
 * @units m, m/s → rad, m, m/s
 * @frame east, north, up of the station
 * @range elevation geometric; range above 0
 * @tolerance 2 ms in AOS and LOS (orbit/reference-passes.test.ts)
 */
export function lookOfView(track: SiteTrack, view: Float64Array): Look {
  const [east, north, up] = [view[EAST]!, view[NORTH]!, view[UP]!]
  const level = Math.sqrt(east * east + north * north)
  const rangeM = Math.sqrt(level * level + up * up)
  const azimuthRad = Math.atan2(east, north)
  return {
    azimuthRad: azimuthRad < 0 ? azimuthRad + 2 * Math.PI : azimuthRad,
    elevationRad: Math.atan2(up, level),
    rangeM,
    rangeRateMps: (east * (view[EAST_RATE]! - track.siteSpeedMps) + north * view[NORTH_RATE]! + up * view[UP_RATE]!) / rangeM,
  }
}
