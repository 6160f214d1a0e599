import { createHash } from 'node:crypto'

/** Mean elements of an invented orbit at a reference epoch, in the units of the published notations. */
export interface DemoOrbit {
  meanMotionRevPerDay: number
  eccentricity: number
  inclinationDeg: number
  raanDeg: number
  argPericenterDeg: number
  meanAnomalyDeg: number
  bstar: number
}

const earthRadiusKm = 6378.135
const muKm3PerS2 = 398600.8
const j2 = 0.001082616

/**
 * The orbit carried to another epoch by the secular rates of the Earth's oblateness (Kozai 1959), with a little
 * scatter such as successive fits show; the scatter follows from the name and the epoch alone.
 */
export function demoElementsAt(name: string, orbit: DemoOrbit, referenceMs: number, epochMs: number): DemoOrbit {
  const n = orbit.meanMotionRevPerDay * 2 * Math.PI / 86_400
  const inclination = orbit.inclinationDeg * Math.PI / 180
  const p = (muKm3PerS2 / n ** 2) ** (1 / 3) * (1 - orbit.eccentricity ** 2)
  const rate = 1.5 * n * j2 * (earthRadiusKm / p) ** 2
  const days = (epochMs - referenceMs) / 86_400_000
  const degPerDay = 86_400 * 180 / Math.PI
  const scatter = (part: string, size: number) => size * (unit(`${name} ${epochMs} ${part}`) - 0.5)
  return {
    ...orbit,
    raanDeg: turn(orbit.raanDeg - rate * Math.cos(inclination) * degPerDay * days + scatter('raan', 0.002)),
    argPericenterDeg: turn(orbit.argPericenterDeg + rate * (2 - 2.5 * Math.sin(inclination) ** 2) * degPerDay * days),
    // The published mean motion is the rate of the mean anomaly already.
    meanAnomalyDeg: turn(orbit.meanAnomalyDeg + orbit.meanMotionRevPerDay * 360 * days + scatter('anomaly', 0.006)),
    meanMotionRevPerDay: orbit.meanMotionRevPerDay + scatter('motion', 2e-6),
  }
}

function turn(deg: number): number {
  return ((deg % 360) + 360) % 360
}

/** A number in [0, 1) that follows from a text. */
function unit(text: string): number {
  return createHash('sha256').update(text).digest().readUInt32BE(0) / 2 ** 32
}

export interface DemoObject { name: string, catalogueNumber: string, designator: string, orbit: DemoOrbit }

/** One night's file: OMM (CCSDS 502.0-B) as JSON. */
export function demoNightFile(objects: readonly DemoObject[], referenceMs: number, epochMs: number): string {
  return JSON.stringify(objects.map(({ name, catalogueNumber, designator, orbit }) => {
    const at = demoElementsAt(name, orbit, referenceMs, epochMs)
    return {
      OBJECT_NAME: name, OBJECT_ID: designator, CENTER_NAME: 'EARTH', REF_FRAME: 'TEME', TIME_SYSTEM: 'UTC', MEAN_ELEMENT_THEORY: 'SGP4',
      EPOCH: new Date(epochMs).toISOString().replace('Z', '000'),
      MEAN_MOTION: round(at.meanMotionRevPerDay, 8), ECCENTRICITY: round(at.eccentricity, 7), INCLINATION: round(at.inclinationDeg, 4),
      RA_OF_ASC_NODE: round(at.raanDeg, 4), ARG_OF_PERICENTER: round(at.argPericenterDeg, 4), MEAN_ANOMALY: round(at.meanAnomalyDeg, 4),
      EPHEMERIS_TYPE: 0, CLASSIFICATION_TYPE: 'U', NORAD_CAT_ID: Number(catalogueNumber), ELEMENT_SET_NO: 999, REV_AT_EPOCH: 0,
      BSTAR: at.bstar, MEAN_MOTION_DOT: 0, MEAN_MOTION_DDOT: 0,
    }
  }), null, 1)
}

function round(value: number, digits: number): number {
  return Number(value.toFixed(digits))
}

/** Nightly epochs at 05:00 UTC over the days before, then the hour of the start. */
export function demoEpochs(nowMs: number, days: number): number[] {
  const day = 86_400_000
  const hour = Math.floor(nowMs / 3_600_000) * 3_600_000
  const lastNight = Math.floor((nowMs - 5 * 3_600_000) / day) * day + 5 * 3_600_000
  return [...Array.from({ length: days }, (_, i) => lastNight - (days - 1 - i) * day), ...(hour > lastNight ? [hour] : [])]
}
