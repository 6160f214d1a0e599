// The package exports no way to build its record from numbers: its two readers take text and lose digits of the
// epoch. So its own initialiser is imported by path; the entry point would bring WebAssembly along as well.
import { sgp4 } from '../../../node_modules/satellite.js/dist/propagation/sgp4.js'
import { sgp4init } from '../../../node_modules/satellite.js/dist/propagation/sgp4init.js'
import type { SatRec, SatRecInit } from '../../../node_modules/satellite.js/dist/propagation/SatRec.js'
import type { MeanElements, Propagation, PropagationError, Propagator, PropagatorResult } from '../types'

const ERROR_NAMES: Readonly<Record<number, PropagationError>> = {
  1: 'eccentricity-out-of-range',
  2: 'mean-motion-not-positive',
  3: 'perturbed-eccentricity-out-of-range',
  4: 'semi-latus-rectum-negative',
  5: 'sub-orbital-epoch',
  6: 'decayed',
}

const RAD_PER_DEG = Math.PI / 180
const US_PER_DAY = 86_400e6
const JULIAN_DATE_1970 = 2_440_587.5
/** 1950 January 0.0, from which SGP4 counts the epoch that it places Sun, Moon and Greenwich with. */
const JULIAN_DATE_1950 = 2_433_281.5
const REV_PER_DAY_IN_RAD_PER_MIN = 2 * Math.PI / 1440

const NUMBERS = ['epochUtcUs', 'meanMotionRevPerDay', 'eccentricity', 'inclinationDeg', 'raanDeg', 'argPericenterDeg',
  'meanAnomalyDeg', 'bstar', 'meanMotionDot', 'meanMotionDdot'] as const

function createRecord(elements: MeanElements): SatRec {
  const meanMotion = elements.meanMotionRevPerDay * REV_PER_DAY_IN_RAD_PER_MIN
  // The published program holds this epoch as a Julian date in one double (40 µs). Only lunar and solar terms and
  // resonances use it; kept alike, the published run repeats to its last digit. Time since the epoch stays exact.
  const julianDate = elements.epochUtcUs / US_PER_DAY + JULIAN_DATE_1970
  const record: SatRecInit = {
    error: 0,
    satnum: elements.catalogueNumber ?? '',
    epochyr: 0,
    epochdays: 0,
    jdsatepoch: julianDate,
    ndot: elements.meanMotionDot * REV_PER_DAY_IN_RAD_PER_MIN / 1440,
    nddot: elements.meanMotionDdot * REV_PER_DAY_IN_RAD_PER_MIN / 1440 ** 2,
    bstar: elements.bstar,
    inclo: elements.inclinationDeg * RAD_PER_DEG,
    nodeo: elements.raanDeg * RAD_PER_DEG,
    ecco: elements.eccentricity,
    argpo: elements.argPericenterDeg * RAD_PER_DEG,
    mo: elements.meanAnomalyDeg * RAD_PER_DEG,
    no: meanMotion,
  }
  const initialise: typeof sgp4init = sgp4init
  initialise(record, {
    opsmode: 'i',
    satn: record.satnum,
    epoch: julianDate - JULIAN_DATE_1950,
    xbstar: record.bstar,
    xecco: record.ecco,
    xargpo: record.argpo,
    xinclo: record.inclo,
    xmo: record.mo,
    xno: record.no,
    xnodeo: record.nodeo,
  })
  return record
}

function propagate(record: SatRec, minutes: number): Propagation {
  const result = sgp4(record, minutes)
  if (result === null) return { ok: false, error: ERROR_NAMES[record.error] ?? 'decayed' }
  const { position: p, velocity: v } = result
  // Long after decay SGP4's drag polynomial turns negative and the published checks pass over it: that, too, is decay.
  if (record.tempa <= 0 || !Number.isFinite(p.x + p.y + p.z + v.x + v.y + v.z)) return { ok: false, error: 'decayed' }
  return { ok: true, positionM: [p.x * 1e3, p.y * 1e3, p.z * 1e3], velocityMps: [v.x * 1e3, v.y * 1e3, v.z * 1e3] }
}

/**
 * SGP4/SDP4 with WGS-72 constants, improved mode: Vallado, Crawford, Hujsak, Kelso, AIAA 2006-6753, by the package
 * satellite.js.
 *
 * Elements in, TEME position (m) and velocity (m/s) out. Instants are taken as exact minutes since the epoch, so the
 * epoch's microseconds count. Agrees with the published run to 0.2 mm and 0.02 mm/s.
 *
 * An error of SGP4 is an outcome with a name, never NaN; elements with which SGP4 fails at their own epoch give no
 * propagator. Throws a RangeError only for elements or instants that are not numbers.
 *
 * @card Propagation: position and velocity of a spacecraft from its mean elements.
 * @formula SGP4 and, from a period of 225 min, SDP4; WGS-72 constants, improved mode
 * @source Vallado, Crawford, Hujsak, Kelso, AIAA 2006-6753; computed by the package satellite.js
 * @units elements as published, UTC ms → m, m/s
 * @frame TEME
 * @range e in [0, 1), mean motion above 0; the first error of SGP4 ends a set, by name
 * @tolerance 0.2 mm and 0.02 mm/s of the published run (orbit/propagator.test.ts)
 */
export function createPropagator(elements: MeanElements): PropagatorResult {
  for (const name of NUMBERS) {
    if (!Number.isFinite(elements[name])) throw new RangeError(`${name} is ${elements[name]}: give a finite number`)
  }
  if (elements.meanMotionRevPerDay <= 0) return { ok: false, error: 'mean-motion-not-positive' }
  if (elements.eccentricity < 0 || elements.eccentricity >= 1) return { ok: false, error: 'eccentricity-out-of-range' }

  const record = createRecord(elements)
  const atEpoch = propagate(record, 0)
  if (!atEpoch.ok) return atEpoch

  const epochMs = Math.floor(elements.epochUtcUs / 1000)
  const epochRestMs = (elements.epochUtcUs - epochMs * 1000) / 1000
  const atMinutes = (minutes: number): Propagation => {
    if (!Number.isFinite(minutes)) throw new RangeError(`The instant is ${minutes}: give a finite number`)
    return propagate(record, minutes)
  }
  const propagator: Propagator = {
    elements,
    atMinutes,
    at: utcMs => atMinutes((utcMs - epochMs - epochRestMs) / 60_000),
  }
  return { ok: true, propagator }
}
