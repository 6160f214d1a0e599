import { geodeticToEcf, gstime, json2satrec, sgp4 } from 'satellite.js'
import type { MaskPoint, MeanElements, Site } from '../../../shared/physics/types'

/** Brute force: SGP4 of the package at every second, its own sidereal time and ellipsoid, nothing of the product's. */

const TURN = 2 * Math.PI
/** Sidereal days in a day. */
const EARTH_RAD_PER_MS = TURN * 1.00273790935 / 86_400_000
/** What interpolation (10 mm) and crossings (0.02 ms) come to, seen from 100 km. */
export const DOUBT_RAD = 2e-6

export interface Seconds {
  readonly startMs: number
  /** Earth-fixed km; three numbers for each second from the start, to the first one at which SGP4 fails. */
  readonly km: Float64Array
  readonly count: number
  /** The first second, counted from the epoch where that was asked for, at which SGP4 fails; Infinity where it does not. */
  readonly failsMs: number
  /** Earth-fixed km at any instant; null where SGP4 fails. */
  readonly at: (utcMs: number) => readonly [number, number, number] | null
}

/** Where the set may fail before the window, it is tried every second from its epoch on (`sinceEpoch`). */
export function everySecond(elements: MeanElements, startMs: number, seconds: number, sinceEpoch: boolean): Seconds {
  const epochMs = elements.epochUtcUs / 1000
  const record = json2satrec({
    OBJECT_NAME: '', OBJECT_ID: '', NORAD_CAT_ID: 0, EPOCH: new Date(epochMs).toISOString(), EPHEMERIS_TYPE: 0, CLASSIFICATION_TYPE: 'U', ELEMENT_SET_NO: 0, REV_AT_EPOCH: 0,
    MEAN_MOTION: elements.meanMotionRevPerDay, ECCENTRICITY: elements.eccentricity, INCLINATION: elements.inclinationDeg, RA_OF_ASC_NODE: elements.raanDeg,
    ARG_OF_PERICENTER: elements.argPericenterDeg, MEAN_ANOMALY: elements.meanAnomalyDeg, BSTAR: elements.bstar, MEAN_MOTION_DOT: 0, MEAN_MOTION_DDOT: 0,
  })
  const sidereal = gstime(startMs / 86_400_000 + 2_440_587.5)
  const at = (utcMs: number): [number, number, number] | null => {
    const state = sgp4(record, (utcMs - epochMs) / 60_000)
    // A drag polynomial below zero is decay that SGP4's own checks pass over.
    if (state === null || record.tempa <= 0) return null
    const { x, y, z } = state.position
    const angle = sidereal + EARTH_RAD_PER_MS * (utcMs - startMs)
    const [s, c] = [Math.sin(angle), Math.cos(angle)]
    return [c * x + s * y, c * y - s * x, z]
  }
  const km = new Float64Array(3 * (seconds + 1))
  let failsMs = Infinity
  for (let ms = epochMs; sinceEpoch && ms < startMs && failsMs === Infinity; ms += 1000) if (at(ms) === null) failsMs = ms
  let count = 0
  for (; count <= seconds && failsMs === Infinity; count++) {
    const place = at(startMs + 1000 * count)
    if (place) km.set(place, 3 * count)
    else {
      failsMs = startMs + 1000 * count
      break
    }
  }
  return { startMs, km, count, failsMs, at }
}

export interface Sky {
  readonly elevation: number
  readonly azimuth: number
}

/** What a station sees, by hand. */
export interface Station {
  readonly site: Site
  /** Sine of the elevation at every second. */
  readonly sines: Float64Array
  readonly skyAtSecond: (k: number) => Sky
  readonly skyAt: (utcMs: number) => Sky | null
  readonly clearanceOf: (sky: Sky) => number
  /** Whether a direction as near as the doubt has another sign. */
  readonly isDoubtful: (sky: Sky) => boolean
  /** The same place with another horizon. */
  readonly under: (horizon: Pick<Site, 'mask' | 'minElevationRad'>) => Station
}

export function stationOf(site: Site, seconds: Seconds): Station {
  const [sinLat, cosLat] = [Math.sin(site.latitudeRad), Math.cos(site.latitudeRad)]
  const [sinLon, cosLon] = [Math.sin(site.longitudeRad), Math.cos(site.longitudeRad)]
  const { x, y, z } = geodeticToEcf({ latitude: site.latitudeRad, longitude: site.longitudeRad, height: site.heightM / 1000 })
  const skyOf = (px: number, py: number, pz: number): Sky => {
    const [dx, dy, dz] = [px - x, py - y, pz - z]
    const up = cosLat * cosLon * dx + cosLat * sinLon * dy + sinLat * dz
    const east = cosLon * dy - sinLon * dx
    const north = cosLat * dz - sinLat * (cosLon * dx + sinLon * dy)
    return { elevation: Math.atan2(up, Math.hypot(east, north)), azimuth: (Math.atan2(east, north) + TURN) % TURN }
  }
  const { km, count } = seconds
  const sines = new Float64Array(count)
  for (let k = 0, i = 0; k < count; k++, i += 3) {
    const [dx, dy, dz] = [km[i]! - x, km[i + 1]! - y, km[i + 2]! - z]
    sines[k] = (cosLat * cosLon * dx + cosLat * sinLon * dy + sinLat * dz) / Math.sqrt(dx * dx + dy * dy + dz * dz)
  }
  const skyAt = (utcMs: number): Sky | null => {
    const place = seconds.at(utcMs)
    return place && skyOf(...place)
  }
  const skyAtSecond = (k: number): Sky => skyOf(km[3 * k]!, km[3 * k + 1]!, km[3 * k + 2]!)
  const under: Station['under'] = ({ mask, minElevationRad }) => {
    const horizon = horizonOf(mask)
    const clearanceOf = ({ elevation, azimuth }: Sky): number => elevation - Math.max(minElevationRad, horizon(azimuth))
    const isDoubtful = ({ elevation, azimuth }: Sky): boolean => {
      const aside = DOUBT_RAD / Math.max(DOUBT_RAD, Math.cos(elevation))
      const signs = [-1, 0, 1].flatMap(i => [-1, 0, 1].map(j => clearanceOf({ elevation: elevation + i * DOUBT_RAD, azimuth: (azimuth + j * aside + TURN) % TURN }) > 0))
      return signs.includes(true) && signs.includes(false)
    }
    return { site: { ...site, mask, minElevationRad }, sines, skyAtSecond, skyAt, clearanceOf, isDoubtful, under }
  }
  return under(site)
}

/** Elevation of a mask by azimuth in [0, 2π), linear, across north. */
function horizonOf(mask: readonly MaskPoint[]): (azimuth: number) => number {
  const points = mask.flatMap(p => [-TURN, 0, TURN].map(turn => [p.azimuthRad + turn, p.elevationRad] as const)).sort((a, b) => a[0] - b[0])
  let i = 1
  return (azimuth) => {
    if (points.length === 0) return -Math.PI
    // From one second to the next the azimuth mostly stays between two points.
    while (azimuth > points[i]![0]) i++
    while (azimuth < points[i - 1]![0]) i--
    const [[a0, e0], [a1, e1]] = [points[i - 1]!, points[i]!]
    return e0 + (e1 - e0) * (azimuth - a0) / (a1 - a0)
  }
}
