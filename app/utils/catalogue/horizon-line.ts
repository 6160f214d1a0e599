import { horizonRad } from '#shared/physics/orbit/mask'
import type { Site } from '#shared/physics/types'

export interface MaskDeg { readonly azimuthDeg: number, readonly elevationDeg: number }
const RAD = Math.PI / 180

/** Points that can be drawn: those whose numbers are in range, while others are still being typed. */
export const drawable = (mask: readonly MaskDeg[]): MaskDeg[] => mask.filter(({ azimuthDeg, elevationDeg }) => azimuthDeg !== null && elevationDeg !== null && azimuthDeg >= 0 && azimuthDeg <= 360 && elevationDeg >= 0 && elevationDeg <= 90)

/** The station's horizon in whole degrees of azimuth and at each point of the mask, as predictions use it; degrees. */
export function horizonLine(mask: readonly MaskDeg[], minElevationDeg: number): MaskDeg[] {
  const points = drawable(mask)
  const site: Site = {
    latitudeRad: 0, longitudeRad: 0, heightM: 0,
    minElevationRad: minElevationDeg * RAD,
    mask: points.map(point => ({ azimuthRad: point.azimuthDeg * RAD, elevationRad: point.elevationDeg * RAD })),
  }
  const azimuths = [...new Set([...Array.from({ length: 361 }, (_, deg) => deg), ...points.map(point => point.azimuthDeg)])].sort((a, b) => a - b)
  return azimuths.map(azimuthDeg => ({ azimuthDeg, elevationDeg: horizonRad(site, azimuthDeg * RAD) / RAD }))
}
