import type { MeanElements } from '../../../physics/types'
import type { OmmPart } from '../omm/keywords'
import { OMM_KEYWORDS } from '../omm/keywords'
import type { MessageOrigin } from './written'

/** A text, or a number's shortest exact decimal form. */
export type OmmValue = { readonly text: string } | { readonly number: string }
export interface OmmLine { readonly key: string, readonly part: OmmPart, readonly value: OmmValue }

/** Microseconds since 1970 as CCSDS writes them: 2026-11-30T12:17:46.665888, UTC. */
export function ommEpoch(epochUtcUs: number): string {
  const ms = Math.floor(epochUtcUs / 1000)
  return `${new Date(ms).toISOString().slice(0, 23)}${String(epochUtcUs - ms * 1000).padStart(3, '0')}`
}

/** The shortest decimal that reads back to the same double; with a point where there is a power of ten. */
export const ommNumber = (value: number): string => String(value).replace(/^(-?\d)e/, '$1.0e')

const text = (value: string | null): OmmValue | null => value === null ? null : { text: value }
const number = (value: number | null): OmmValue | null => value === null ? null : { number: ommNumber(value) }

function valuesOf(e: MeanElements, origin: MessageOrigin): Readonly<Record<string, OmmValue | null>> {
  return {
    CCSDS_OMM_VERS: text('3.0'),
    CREATION_DATE: text(new Date(origin.createdMs).toISOString().slice(0, 19)),
    ORIGINATOR: text(origin.originator),
    OBJECT_NAME: text(e.name),
    OBJECT_ID: text(e.designator),
    CENTER_NAME: text('EARTH'),
    REF_FRAME: text('TEME'),
    TIME_SYSTEM: text('UTC'),
    MEAN_ELEMENT_THEORY: text('SGP4'),
    EPOCH: text(ommEpoch(e.epochUtcUs)),
    MEAN_MOTION: number(e.meanMotionRevPerDay),
    ECCENTRICITY: number(e.eccentricity),
    INCLINATION: number(e.inclinationDeg),
    RA_OF_ASC_NODE: number(e.raanDeg),
    ARG_OF_PERICENTER: number(e.argPericenterDeg),
    MEAN_ANOMALY: number(e.meanAnomalyDeg),
    EPHEMERIS_TYPE: number(0),
    CLASSIFICATION_TYPE: text(e.classification),
    NORAD_CAT_ID: number(e.catalogueNumber === null ? null : Number(e.catalogueNumber)),
    ELEMENT_SET_NO: number(e.elementSetNumber),
    REV_AT_EPOCH: number(e.revolutionAtEpoch),
    BSTAR: number(e.bstar),
    MEAN_MOTION_DOT: number(e.meanMotionDot),
    MEAN_MOTION_DDOT: number(e.meanMotionDdot),
  }
}

/**
 * A whole message (CCSDS 502.0-B-3, tables 4-1 to 4-3), keyword by keyword in the order of the standard. What is not known
 * is left out, but a name and a designator, which the standard demands, are UNKNOWN.
 */
export function messageLines(e: MeanElements, origin: MessageOrigin): OmmLine[] {
  const values = valuesOf(e, origin)
  return OMM_KEYWORDS.flatMap(({ key, part }): OmmLine[] => {
    const value = values[key] ?? (key === 'OBJECT_NAME' || key === 'OBJECT_ID' ? { text: 'UNKNOWN' } : null)
    return value ? [{ key, part, value }] : []
  })
}

/** The columns of flat exports (JSON, CSV): names, elements and what a TLE has; conventions are those of SGP4. */
export const FLAT_KEYWORDS: readonly string[] = OMM_KEYWORDS.map(({ key }) => key)
  .filter(key => ['OBJECT_NAME', 'OBJECT_ID'].includes(key) || ['meanElements', 'tleParameters'].includes(OMM_KEYWORDS.find(known => known.key === key)!.part))
  .filter(key => !['SEMI_MAJOR_AXIS', 'GM', 'BTERM', 'AGOM'].includes(key))

/** Values under FLAT_KEYWORDS; null for what is not known. */
export function flatValues(e: MeanElements): (OmmValue | null)[] {
  const values = valuesOf(e, { createdMs: 0, originator: '' })
  return FLAT_KEYWORDS.map(key => values[key] ?? null)
}
