import type { MeanElements, UtcMs } from '../types'
import { manoeuvreSpreadM, type ManoeuvreSpread } from './manoeuvre-spread'

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
  /** Burns that these elements know nothing of; left out where there are none. */
  readonly manoeuvres?: readonly ManoeuvreSpread[]
}

/** Semi-major axis by Kepler's third law from the set's mean motion, km; its small secular correction (up to 10 km) is left out. */
function semiMajorAxisKm({ meanMotionRevPerDay }: Pick<MeanElements, 'meanMotionRevPerDay'>): number {
  const radPerS = meanMotionRevPerDay * 2 * Math.PI / 86_400
  return Math.cbrt(EARTH_GM_KM3PS2 / radPerS ** 2)
}

/**
 * Height of the perigee above the equatorial radius, km: a(1 − e) − R.
 *
 * @card Perigee height: which prior a set takes.
 * @formula (GM/n²)^⅓·(1 − e) − R
 * @source Kepler’s third law; constants of WGS-72
 * @units rev/day, e → km
 * @frame above the equatorial radius
 * @range e in [0, 1); secular terms left out, up to 10 km
 * @tolerance 3 km at 500 km, 5 km geostationary (accuracy/prior.test.ts)
 */
export function perigeeHeightKm(elements: Pick<MeanElements, 'meanMotionRevPerDay' | 'eccentricity'>): number {
  return semiMajorAxisKm(elements) * (1 - elements.eccentricity) - EARTH_RADIUS_KM
}

/**
 * Mean speed along the orbit, n·a, m/s: what turns a distance along track into a time.
 *
 * @card Mean speed: what turns a distance along the orbit into a time.
 * @formula n·a
 * @source Kepler’s third law
 * @units rev/day → m/s
 * @frame none
 * @range mean motion above 0
 * @tolerance 5 m/s of handbook values (accuracy/prior.test.ts)
 */
export function meanSpeedMps(elements: Pick<MeanElements, 'meanMotionRevPerDay'>): number {
  return elements.meanMotionRevPerDay * 2 * Math.PI / 86_400 * semiMajorAxisKm(elements) * 1000
}

/**
 * Fastest the spacecraft gets, at its perigee, m/s: √(GM/a · (1+e)/(1−e)).
 *
 * @card Perigee speed: the fastest that a spacecraft gets.
 * @formula √(GM/a·(1 + e)/(1 − e))
 * @source vis-viva; mechanics
 * @units rev/day, e → m/s
 * @frame none
 * @range e in [0, 1)
 * @tolerance 0.5 km/s at a Molniya perigee, 1e-6 m/s on a circle (accuracy/prior.test.ts)
 */
export function perigeeSpeedMps(elements: Pick<MeanElements, 'meanMotionRevPerDay' | 'eccentricity'>): number {
  const e = elements.eccentricity
  return Math.sqrt(EARTH_GM_KM3PS2 / semiMajorAxisKm(elements) * (1 + e) / (1 - e)) * 1000
}

/**
 * The along-track accuracy that is assumed of element sets before a spacecraft's own is known, by the height of the
 * perigee. Judgement from published studies: Flohrer 2008; Levit and Marshall 2011; Riesing 2015.
 *
 * @card Assumed accuracy: floor and growth of the along-track spread before any is known.
 * @formula the low figures for perigees under 800 km, the high ones above; a setting
 * @source judgement from Flohrer 2008; Levit, Marshall 2011; Riesing 2015
 * @units rev/day, e → km, km/day, 1 σ
 * @frame along track
 * @range the first week after deployment is worse
 * @tolerance exact choice by perigee (accuracy/prior.test.ts)
 */
export function priorFor(elements: Pick<MeanElements, 'meanMotionRevPerDay' | 'eccentricity'>, prior: AlongTrackPrior): AlongTrackGrowth {
  return perigeeHeightKm(elements) < LOW_PERIGEE_KM
    ? { floorKm: prior.lowFloorKm, growthKmPerDay: prior.lowGrowthKmPerDay }
    : { floorKm: prior.highFloorKm, growthKmPerDay: prior.highGrowthKmPerDay }
}

/**
 * One sigma of along-track timing, s, at an instant: (floor + growth · age)/speed, the age counted either way from the
 * epoch, and beside it, as root of squares, what burns leave open that these elements do not know of (`manoeuvreSpreadM`).
 *
 * @card Age of elements: spread of the spacecraft’s timing at an instant.
 * @formula √((floor + growth·|t − epoch|)² + Σ manoeuvres²)/speed
 * @source mechanics
 * @units km, km/day, m/s, UTC ms → s, 1 σ
 * @frame along track
 * @range either side of the epoch
 * @tolerance 1e-12 s of values by hand (accuracy/prior.test.ts)
 */
export function alongTrackSigmaS(model: AlongTrackModel): (utcMs: UtcMs) => number {
  const { floorKm, growthKmPerDay, epochMs, speedMps, manoeuvres = [] } = model
  const byAgeM = (utcMs: UtcMs): number => (floorKm + growthKmPerDay * Math.abs(utcMs - epochMs) / MS_PER_DAY) * 1000
  if (manoeuvres.length === 0) return utcMs => byAgeM(utcMs) / speedMps
  return utcMs => Math.hypot(byAgeM(utcMs), ...manoeuvres.map(burn => manoeuvreSpreadM(burn, utcMs))) / speedMps
}
