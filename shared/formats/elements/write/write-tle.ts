import type { MeanElements } from '../../../physics/types'
import { tleChecksum } from '../tle/checksum'
import { tleEpochField } from './tle-epoch'
import type { TleField } from './tle-fields'
import { catalogueField, derivativeField, fixedField, impliedField, powerField } from './tle-fields'
import type { WrittenElements } from './written'
import { labelOf } from './written'

/** Thrown inside, where a TLE cannot carry a set. */
class NoTle extends Error {}

const ELSEWHERE = 'Take it as OMM (KVN, XML, JSON or CSV).'

/** Why a set cannot be written as a TLE at all, known from its number and epoch alone; null where it can. */
export function whyNoTle({ catalogueNumber, epochUtcUs }: Pick<MeanElements, 'catalogueNumber' | 'epochUtcUs'>): string | null {
  if (catalogueNumber === null) return `A TLE needs a catalogue number, and this set has none. ${ELSEWHERE}`
  if (catalogueField(catalogueNumber) === null) return `A TLE cannot carry catalogue number ${catalogueNumber}: its five columns end at 339999 (Z9999 in Alpha-5). ${ELSEWHERE}`
  if (tleEpochField(epochUtcUs) === null) return `A TLE cannot carry an epoch outside 1957 to 2056. ${ELSEWHERE}`
  return null
}

/** "2026-801A" is "26801A  "; text of another form is left out. */
function designatorField(designator: string | null): TleField {
  const found = /^(\d{2})(\d{2})-(\d{3}[A-Z]{1,3})$/.exec(designator ?? '')
  const isTold = found && Number(`${found[1]}${found[2]}`) >= 1957 && Number(`${found[1]}${found[2]}`) <= 2056
  return { text: (isTold ? found[2]! + found[3]! : '').padEnd(8), isRounded: designator !== null && !isTold }
}

/** Counters begin again when their columns are full; one that is not known is 0. */
function counterField(value: number | null, width: number): TleField {
  const kept = (value ?? 0) % 10 ** width
  return { text: String(kept).padStart(width), isRounded: value !== kept }
}

/** From 0 up to, not including, 360 degrees. */
function angleField(degrees: number): TleField | null {
  const isInTurn = degrees >= 0 && degrees <= 360
  const turned = isInTurn ? degrees : ((degrees % 360) + 360) % 360
  const field = fixedField(turned, 8, 4)
  if (!field) return null
  const text = field.text === '360.0000' && turned < 360 ? '  0.0000' : field.text
  return { text, isRounded: Number(text) !== degrees }
}

/** Plain names stand as they are; others behind the "0 " that marks a name line, so that none is taken for something else. */
const nameLine = (name: string): string => /^[A-Za-z1-9][\w ./()+-]*$/.test(name) && !/^[12] /.test(name) ? name : `0 ${name}`

/**
 * A set in the published two-line format, its name before it where it has one: columns, checksums and Alpha-5 as read.
 * What the columns cannot carry to the last digit is rounded and named in `changed`: the epoch to 0.864 ms, angles to
 * 0.0001°, eccentricity and mean motion to their seventh and eighth decimal.
 * @param e a set in use of SGP4; ranges as the reader holds them
 */
export function writeTle(e: MeanElements): WrittenElements {
  const changed: string[] = []
  const field = (keyword: string, written: TleField | null): string => {
    if (!written) throw new NoTle(`A TLE has no columns for the ${keyword} of ${labelOf(e)}. ${ELSEWHERE}`)
    if (written.isRounded) changed.push(keyword)
    return written.text
  }
  const impossible = whyNoTle(e)
  if (impossible !== null) return { ok: false, reason: impossible }
  try {
    const number = catalogueField(e.catalogueNumber!)!
    const classification = /^[A-Z]$/.test(e.classification) ? e.classification : 'U'
    if (classification !== e.classification) changed.push('CLASSIFICATION_TYPE')
    const line1 = `1 ${number}${classification} ${field('OBJECT_ID', designatorField(e.designator))} ${field('EPOCH', tleEpochField(e.epochUtcUs))} `
      + `${field('MEAN_MOTION_DOT', derivativeField(e.meanMotionDot))} ${field('MEAN_MOTION_DDOT', powerField(e.meanMotionDdot))} ${field('BSTAR', powerField(e.bstar))} 0 `
      + field('ELEMENT_SET_NO', counterField(e.elementSetNumber, 4))
    const line2 = `2 ${number} ${field('INCLINATION', fixedField(e.inclinationDeg, 8, 4))} ${field('RA_OF_ASC_NODE', angleField(e.raanDeg))} `
      + `${field('ECCENTRICITY', impliedField(e.eccentricity, 7))} ${field('ARG_OF_PERICENTER', angleField(e.argPericenterDeg))} ${field('MEAN_ANOMALY', angleField(e.meanAnomalyDeg))} `
      + `${field('MEAN_MOTION', meanMotionField(e.meanMotionRevPerDay))}${field('REV_AT_EPOCH', counterField(e.revolutionAtEpoch, 5))}`
    const lines = [line1, line2].map(line => `${line}${tleChecksum(line)}`)
    return { ok: true, text: [...e.name === null ? [] : [nameLine(e.name)], ...lines, ''].join('\n'), changed }
  }
  catch (error) {
    if (error instanceof NoTle) return { ok: false, reason: error.message }
    throw error
  }
}

/** A mean motion that would be printed as zero is none. */
function meanMotionField(revPerDay: number): TleField | null {
  const field = fixedField(revPerDay, 11, 8)
  return field && Number(field.text) > 0 ? field : null
}
