import type { MaskPoint, Site } from '../types'

const TWO_PI = 2 * Math.PI
const turn = (angleRad: number): number => ((angleRad % TWO_PI) + TWO_PI) % TWO_PI

const sortedMasks = new WeakMap<readonly MaskPoint[], readonly MaskPoint[]>()

/** Mask points with azimuths in [0, 2π), rising; kept by mask object. */
export function sortedMask(mask: readonly MaskPoint[]): readonly MaskPoint[] {
  const known = sortedMasks.get(mask)
  if (known) return known
  const sorted = mask
    .map(point => ({ azimuthRad: turn(point.azimuthRad), elevationRad: point.elevationRad }))
    .sort((a, b) => a.azimuthRad - b.azimuthRad)
  sortedMasks.set(mask, sorted)
  return sorted
}

/** Elevation of the mask at an azimuth: linear between neighbouring points, across north; null without a mask. */
function maskElevation(mask: readonly MaskPoint[], azimuthRad: number): number | null {
  const points = sortedMask(mask)
  const first = points[0]
  const last = points[points.length - 1]
  if (!first || !last) return null
  const azimuth = turn(azimuthRad)
  let next = points.findIndex(point => point.azimuthRad >= azimuth)
  if (next < 0) next = points.length
  const before = points[next - 1] ?? { azimuthRad: last.azimuthRad - TWO_PI, elevationRad: last.elevationRad }
  const after = points[next] ?? { azimuthRad: first.azimuthRad + TWO_PI, elevationRad: first.elevationRad }
  // At a step (two points at one azimuth) the higher side counts.
  if (after.azimuthRad === azimuth) {
    return Math.max(...points.filter(point => point.azimuthRad === azimuth).map(point => point.elevationRad), after.elevationRad)
  }
  const share = (azimuth - before.azimuthRad) / (after.azimuthRad - before.azimuthRad)
  return before.elevationRad + share * (after.elevationRad - before.elevationRad)
}

/**
 * The horizon of a site at an azimuth, rad: the larger of the site's and the link's minimum elevation and the mask
 * there. The mask is linear between its points, across north too; a mask of one point holds all round.
 *
 * @card Horizon: the elevation from which a link works at an azimuth.
 * @formula larger of the least elevations of station and link and of the mask, linear between its points and across north
 * @source common practice
 * @units rad → rad
 * @frame station’s horizon, azimuth from true north clockwise
 * @range any azimuth; a mask of one point holds all round
 * @tolerance 1e-9° of values by hand (orbit/mask.test.ts)
 */
export function horizonRad(site: Site, azimuthRad: number, linkMinElevationRad = -Infinity): number {
  const plain = Math.max(site.minElevationRad, linkMinElevationRad)
  return Math.max(plain, maskElevation(site.mask, azimuthRad) ?? plain)
}
