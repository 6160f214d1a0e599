import { readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { readElements } from '#shared/formats/elements/read-elements'
import type { ElementReading } from '#shared/formats/elements/read-elements'

/** The afternoon of the day on which the example sets have their epochs. */
export const NOW_MS = Date.UTC(2026, 10, 30, 18)

const folder = fileURLToPath(new URL('../../../../data/reference/', import.meta.url))

export const referenceBytes = (path: string): Uint8Array => new Uint8Array(readFileSync(folder + path))
export const referenceText = (path: string): string => readFileSync(folder + path, 'utf8')

export const readText = (text: string, limit?: number): ElementReading =>
  readElements(new TextEncoder().encode(text), limit === undefined ? { nowMs: NOW_MS } : { nowMs: NOW_MS, limit })

export function mustRead(reading: ElementReading) {
  if (reading.kind !== 'read') throw new Error(`refused whole: ${reading.detail} ${JSON.stringify(reading.errors)}`)
  return reading
}

export function mustRefuse(reading: ElementReading) {
  if (reading.kind !== 'refused') throw new Error(`read ${reading.sets.length} sets where a refusal was due`)
  return reading
}

/** The one set of an upload. */
export function onlySet(reading: ElementReading) {
  const { sets } = mustRead(reading)
  if (sets.length !== 1) throw new Error(`${sets.length} sets where one was due`)
  return sets[0]!
}

/** An OMM with invented numbers, as flat JSON members, changed as a case needs. */
export const ommMembers = (changes: Record<string, unknown> = {}): Record<string, unknown> => ({
  OBJECT_NAME: 'INVENTED', OBJECT_ID: '2026-801A', EPOCH: '2026-11-30T12:17:46.665888', MEAN_MOTION: 15.21987654, ECCENTRICITY: 0.0012345,
  INCLINATION: 97.4021, RA_OF_ASC_NODE: 45.1234, ARG_OF_PERICENTER: 87.6543, MEAN_ANOMALY: 272.5678, EPHEMERIS_TYPE: 0, CLASSIFICATION_TYPE: 'U',
  NORAD_CAT_ID: 90001, ELEMENT_SET_NO: 101, REV_AT_EPOCH: 4321, BSTAR: 0.00031234, MEAN_MOTION_DOT: 8.123e-5, MEAN_MOTION_DDOT: 0, ...changes,
})
export const omm = (changes: Record<string, unknown> = {}): string => JSON.stringify(ommMembers(changes))

const HEADER = { CCSDS_OMM_VERS: '3.0', CREATION_DATE: '2026-11-30T20:00:00', ORIGINATOR: 'REF' }
const CONVENTIONS = { CENTER_NAME: 'EARTH', REF_FRAME: 'TEME', TIME_SYSTEM: 'UTC', MEAN_ELEMENT_THEORY: 'SGP4' }
type Changes = Record<string, string | number | undefined>

/** The keywords of a whole message, in the order of the standard; those changed to undefined are left out. */
export const messageValues = (changes: Changes = {}): [string, string][] =>
  Object.entries({ ...HEADER, ...CONVENTIONS, ...ommMembers(), ...changes } as Changes).filter(([, value]) => value !== undefined).map(([key, value]) => [key, String(value)])

export const kvn = (changes: Changes = {}): string => messageValues(changes).map(([key, value]) => `${key} = ${value}\n`).join('')

/** An `omm` element, one value a line from line 2 on; `inside` stands after the last one. */
export const xml = (changes: Changes = {}, inside = ''): string => {
  const values = messageValues({ ...changes, CCSDS_OMM_VERS: undefined }).map(([key, value]) => `<${key}>${value}</${key}>\n`).join('')
  return `<omm id="CCSDS_OMM_VERS" version="3.0"><body><segment><data>\n${values}${inside}</data></segment></body></omm>`
}

/** A header and a row for each set of changes. */
export const csv = (...rows: Changes[]): string =>
  [Object.keys(ommMembers()), ...rows.map(changes => Object.values({ ...ommMembers(), ...changes } as Changes))].map(row => row.join(',')).join('\n')

/** Line with the checksum that the published rule gives, counted here on its own. */
export function withChecksum(line: string): string {
  const sum = [...line.slice(0, 68)].reduce((total, c) => total + (c === '-' ? 1 : Number.isNaN(Number.parseInt(c)) ? 0 : Number(c)), 0)
  return line.slice(0, 68) + String(sum % 10)
}

export const LINE_1 = '1 90001U 26801A   26334.51234567  .00008123  00000+0  31234-3 0  1012'
export const LINE_2 = '2 90001  97.4021  45.1234 0012345  87.6543 272.5678 15.21987654 43217'

/** Text put into a line at a 1-based column, the checksum made right again. */
export const put = (line: string, column: number, text: string): string =>
  withChecksum(line.slice(0, column - 1) + text + line.slice(column - 1 + text.length))
