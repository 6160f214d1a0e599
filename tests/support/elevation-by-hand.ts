import type { Propagator, Site } from '../../shared/physics/types'
import { elevationAzimuth } from './topocentric'

/** Clearance above minimum and mask (rad) at an instant, by plain means: for brute-force comparison only. */
export function clearanceByHand(propagator: Propagator, site: Site, utcMs: number, minElevationRad: number): number {
  const state = propagator.at(utcMs)
  if (!state.ok) return -Math.PI
  const { elevation, azimuth } = elevationAzimuth(site, state.positionM, utcMs)
  return elevation - Math.max(minElevationRad, maskByHand(site, azimuth))
}

function maskByHand(site: Site, azimuth: number): number {
  const points = site.mask.flatMap(p => [-1, 0, 1].map(turns => [p.azimuthRad + turns * 2 * Math.PI, p.elevationRad] as const))
    .sort((a, b) => a[0] - b[0])
  for (let i = 1; i < points.length; i++) {
    const [[a0, e0], [a1, e1]] = [points[i - 1]!, points[i]!]
    if (a0 <= azimuth && azimuth <= a1) return a1 === a0 ? Math.max(e0, e1) : e0 + (e1 - e0) * (azimuth - a0) / (a1 - a0)
  }
  return -Math.PI
}
