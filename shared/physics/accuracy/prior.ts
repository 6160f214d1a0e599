import type { MeanElements, UtcMs } from '../types'

/** WGS-72, as SGP4 has them: gravity, km³/s², and the Earth's radius, km. */
const EARTH_GM_KM3PS2 = 398_600.8
const EARTH_RADIUS_KM = 6378.135
const MS_PER_DAY = 86_400_000

/** Perigees under this height take the low orbit's prior. */
export const LOW_PERIGEE_KM = 800

/** One sigma along track at the epoch and its growth, km and km/day. */
export interface AlongTrackGrowth { readonly floorKm: number, readonly growthKmPerDay: number }

/** The prior for perigees under and above `LOW_PERIGEE_KM`. */
export interface AlongTrackPrior {
  readonly lowFloorKm: number
  readonly lowGrowthKmPerDay: number
  readonly highFloorKm: number
  readonly highGrowthKmPerDay: number
}

/** All that `alongTrackSigmaS` needs, as plain data. */
export interface AlongTrackModel extends AlongTrackGrowth {
  readonly epochMs: UtcMs
  readonly speedMps: number
}

/** Semi-major axis by Kepler's third law from the set's mean motion, km; its small secular correction (up to 10 km) is left out. */
function semiMajorAxisKm({ meanMotionRevPerDay }: Pick<MeanElements, 'meanMotionRevPerDay'>): number {
  const radPerS = meanMotionRevPerDay * 2 * Math.PI / 86_400
  return Math.cbrt(EARTH_GM_KM3PS2 / radPerS ** 2)
}

/** Height of the perigee above the equatorial radius, km: a(1 − e) − R. */
export function perigeeHeightKm(elements: Pick<MeanElements, 'meanMotionRevPerDay' | 'eccentricity'>): number {
  return semiMajorAxisKm(elements) * (1 - elements.eccentricity) - EARTH_RADIUS_KM
}

/** Mean speed along the orbit, n·a, m/s: what turns a distance along track into a time. */
export function meanSpeedMps(elements: Pick<MeanElements, 'meanMotionRevPerDay'>): number {
  return elements.meanMotionRevPerDay * 2 * Math.PI / 86_400 * semiMajorAxisKm(elements) * 1000
}

/** Fastest the spacecraft gets, at its perigee, m/s: √(GM/a · (1+e)/(1−e)). */
export function perigeeSpeedMps(elements: Pick<MeanElements, 'meanMotionRevPerDay' | 'eccentricity'>): number {
  const e = elements.eccentricity
  return Math.sqrt(EARTH_GM_KM3PS2 / semiMajorAxisKm(elements) * (1 + e) / (1 - e)) * 1000
}

/**
 * The along-track accuracy that is assumed of element sets before a spacecraft's own is known, by the height of the
 * perigee. Judgement from published studies: Flohrer 2008; Levit and Marshall 2011; Riesing 2015.
 */
export function priorFor(elements: Pick<MeanElements, 'meanMotionRevPerDay' | 'eccentricity'>, prior: AlongTrackPrior): AlongTrackGrowth {
  return perigeeHeightKm(elements) < LOW_PERIGEE_KM
    ? { floorKm: prior.lowFloorKm, growthKmPerDay: prior.lowGrowthKmPerDay }
    : { floorKm: prior.highFloorKm, growthKmPerDay: prior.highGrowthKmPerDay }
}

/** One sigma of along-track timing, s, at an instant: (floor + growth · age)/speed, the age counted either way from the epoch. */
export function alongTrackSigmaS(model: AlongTrackModel): (utcMs: UtcMs) => number {
  return utcMs => (model.floorKm + model.growthKmPerDay * Math.abs(utcMs - model.epochMs) / MS_PER_DAY) * 1000 / model.speedMps
}
