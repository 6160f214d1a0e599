import { json2satrec } from 'satellite.js'
import type { MeanElements } from '../../shared/physics/types'

const MINUTES_PER_DAY = 1440
const DEG_PER_RAD = 180 / Math.PI

/** Uniform numbers in (0, 1) from a seed (mulberry32, public domain). */
export function seeded(seed: number): () => number {
  let state = seed
  return () => {
    state = (state + 0x6D2B79F5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296
  }
}

/** Normal errors of spread one: quantiles of a large Box–Muller sample, so that few stand for the whole, in a seeded order. */
export function normalErrors(count: number, seed: number): number[] {
  const random = seeded(seed)
  const per = 400
  const sample = Array.from({ length: count * per }, () => Math.sqrt(-2 * Math.log(random())) * Math.cos(2 * Math.PI * random())).sort((a, b) => a - b)
  const errors = Array.from({ length: count }, (_, i) => sample[i * per + per / 2]!)
  for (let i = count - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    [errors[i], errors[j]] = [errors[j]!, errors[i]!]
  }
  return errors
}

/** Without drag: the true orbit's mean angles turn evenly, at the rates that the library's own initialiser gives. */
const base: MeanElements = {
  name: 'KNOT 1', catalogueNumber: '70001', designator: null, epochUtcUs: Date.UTC(2026, 8, 1) * 1000, meanMotionRevPerDay: 15.2, eccentricity: 0.001, inclinationDeg: 97.4,
  raanDeg: 30, argPericenterDeg: 70, meanAnomalyDeg: 10, bstar: 0, meanMotionDot: 0, meanMotionDdot: 0, classification: 'U', elementSetNumber: 1, revolutionAtEpoch: 1,
}

const rates = json2satrec({
  OBJECT_NAME: 'KNOT 1', OBJECT_ID: '2026-801A', EPOCH: '2026-09-01T00:00:00.000000', MEAN_MOTION: 15.2, ECCENTRICITY: 0.001, INCLINATION: 97.4, RA_OF_ASC_NODE: 30, ARG_OF_PERICENTER: 70,
  MEAN_ANOMALY: 10, EPHEMERIS_TYPE: 0, CLASSIFICATION_TYPE: 'U', NORAD_CAT_ID: 70001, ELEMENT_SET_NO: 1, REV_AT_EPOCH: 1, BSTAR: 0, MEAN_MOTION_DOT: 0, MEAN_MOTION_DDOT: 0,
})

const turned = (degrees: number): number => ((degrees % 360) + 360) % 360

/** The set of one true orbit at an epoch, with a known error of its own: seconds ahead at its epoch, and seconds gained a day. */
export function setAt(day: number, { aheadS = 0, gainSPerDay = 0 } = {}): MeanElements {
  const angle = (degrees: number, radPerMinute: number): number => turned(degrees + radPerMinute * DEG_PER_RAD * MINUTES_PER_DAY * day)
  return {
    ...base,
    epochUtcUs: base.epochUtcUs + Math.round(day * 86_400e6),
    raanDeg: angle(base.raanDeg, rates.nodedot),
    argPericenterDeg: angle(base.argPericenterDeg, rates.argpdot),
    meanAnomalyDeg: turned(angle(base.meanAnomalyDeg, rates.mdot) + base.meanMotionRevPerDay * 360 * aheadS / 86_400),
    meanMotionRevPerDay: base.meanMotionRevPerDay * (1 + gainSPerDay / 86_400),
  }
}
