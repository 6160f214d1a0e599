import type { MaskPoint, Site } from '../../../shared/physics/types'
import { RAD } from '../../support/reference-elements'
import type { Seconds, Sky, Station } from './by-the-second'

/** Horizons made for one station and one orbit, so that the spacecraft only just clears them, or only just does not. */

export type Horizon = Pick<Site, 'mask' | 'minElevationRad'>
export interface Awkward { readonly horizon: Horizon, readonly atMs: number }

const [PI, TURN] = [Math.PI, 2 * Math.PI]
const GOLDEN = (3 - Math.sqrt(5)) / 2
const signed = (angle: number): number => Math.atan2(Math.sin(angle), Math.cos(angle))

/** Second after which a series turns round, up to down or down to up, with no jump such as a step of a mask. */
function turnsOf(series: ArrayLike<number>, count: number, isAsked: (k: number) => boolean): number[] {
  const turns: number[] = []
  for (let k = 1; k + 1 < count; k++) {
    if ((series[k]! - series[k - 1]!) * (series[k + 1]! - series[k]!) < 0 && isAsked(k)) turns.push(k)
  }
  return turns
}

/** The extreme within a second of second k, to a millisecond. */
function refine(f: (utcMs: number) => number, seconds: Seconds, k: number): number {
  const at = (i: number): number => seconds.startMs + 1000 * i
  const sign = f(at(k)) > f(at(k - 1)) ? 1 : -1
  let [left, right] = [at(k - 1), at(k + 1)]
  while (right - left > 1) {
    const [a, b] = [left + GOLDEN * (right - left), right - GOLDEN * (right - left)]
    if (sign * f(a) > sign * f(b)) right = b
    else left = a
  }
  return (left + right) / 2
}

const skyAt = (station: Station, ms: number): Sky => station.skyAt(ms) ?? { elevation: -PI / 2, azimuth: 0 }
const pickOf = <T>(all: readonly T[], pick: number): T | undefined => all[pick % all.length]

/** A plain minimum a little below (`offsetRad` above 0) or above a highest or lowest elevation. */
export function grazedByElevation(station: Station, seconds: Seconds, pick: number, offsetRad: number): Awkward | null {
  const { sines } = station
  const k = pickOf(turnsOf(sines, seconds.count, i => sines[i]! > 0.001), pick)
  if (k === undefined) return null
  const atMs = refine(ms => skyAt(station, ms).elevation, seconds, k)
  const minElevationRad = skyAt(station, atMs).elevation - offsetRad
  return minElevationRad < 0 || minElevationRad >= PI / 2 ? null : { atMs, horizon: { mask: [], minElevationRad } }
}

/** The station's own mask raised or lowered until the spacecraft clears it by `offsetRad` where it comes closest, or dips closest. */
export function grazedByMask(station: Station, seconds: Seconds, pick: number, offsetRad: number): Awkward | null {
  const { sines, site } = station
  if (site.mask.length === 0) return null
  const over = station.under({ mask: site.mask, minElevationRad: -PI })
  const clearance = Float64Array.from(sines, (sine, k) => sine > 0 ? over.clearanceOf(over.skyAtSecond(k)) : NaN)
  const k = pickOf(turnsOf(clearance, seconds.count, i => Math.abs(clearance[i]!) < 30 * RAD), pick)
  if (k === undefined) return null
  const atMs = refine(ms => over.clearanceOf(skyAt(over, ms)), seconds, k)
  const lift = over.clearanceOf(skyAt(over, atMs)) - offsetRad
  const mask = site.mask.map(({ azimuthRad, elevationRad }) => ({ azimuthRad, elevationRad: Math.min(PI / 2, Math.max(0, elevationRad + lift)) }))
  return { atMs, horizon: { mask, minElevationRad: 0 } }
}

/** A wall, or a gap in one, that the spacecraft enters only for moments, where its azimuth turns round. */
export function grazedByTurning(station: Station, seconds: Seconds, pick: number, momentS: number, isGap: boolean): Awkward | null {
  const azimuths = new Float64Array(seconds.count)
  for (let k = 0, from = 0; k < seconds.count; k++) {
    if (station.sines[k]! <= 0.02) azimuths[k] = NaN
    else azimuths[k] = from += signed(station.skyAtSecond(k).azimuth - from)
  }
  const k = pickOf(turnsOf(azimuths, seconds.count, i => station.sines[i]! < 0.95), pick)
  if (k === undefined) return null
  const isRight = azimuths[k]! > azimuths[k - 1]!
  const atMs = refine(ms => signed(skyAt(station, ms).azimuth - azimuths[k]!), seconds, k)
  const edge = skyAt(station, atMs - momentS * 500).azimuth
  if (Math.abs(signed(edge - azimuths[k]!)) > 60 * RAD) return null
  const [inside, outside] = isGap ? [0, 89 * RAD] : [89 * RAD, 0]
  const point = (offset: number, elevationRad: number): MaskPoint => ({ azimuthRad: (edge + (isRight ? offset : -offset) + TURN) % TURN, elevationRad })
  return { atMs, horizon: { minElevationRad: 0, mask: [point(-1e-7, outside), point(1e-7, inside), point(70 * RAD, inside), point(71 * RAD, outside)] } }
}
