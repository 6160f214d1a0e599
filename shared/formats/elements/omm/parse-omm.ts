import type { MeanElements } from '../../../physics/types'
import { cleanName } from '../clean-name'
import { checkRanges } from '../ranges'
import type { Warn } from '../reading'
import { SetRefusal } from '../reading'
import { quote } from '../show-value'
import { checkConventions } from './conventions'
import { readOmmEpoch } from './epoch'
import type { OmmEntry } from './fields'
import { OmmFields, commaHint } from './fields'
import { checkHeader } from './header'

/** A whole message of the standard (KVN, XML), or the flat keywords that JSON and CSV exports carry. */
export type OmmExtent = 'message' | 'flat'

/** Keyword of each ranged element, for the line on which it stands. */
const KEYWORDS = {
  meanMotionRevPerDay: 'MEAN_MOTION',
  eccentricity: 'ECCENTRICITY',
  inclinationDeg: 'INCLINATION',
  raanDeg: 'RA_OF_ASC_NODE',
  argPericenterDeg: 'ARG_OF_PERICENTER',
  meanAnomalyDeg: 'MEAN_ANOMALY',
} as const

function readEpoch(fields: OmmFields, warn: Warn): number {
  const text = fields.requiredText('EPOCH')
  const epoch = readOmmEpoch(text)
  if (!epoch.ok) throw new SetRefusal(fields.lineOf('EPOCH'), 'epoch', `EPOCH reads ${quote(text)}. ${commaHint(text)}${epoch.message}`)
  if (epoch.warning) warn(fields.lineOf('EPOCH'), epoch.warning.code, epoch.warning.message)
  return epoch.epochUtcUs
}

function readCatalogueNumber(fields: OmmFields, warn: Warn): string | null {
  const number = fields.whole('NORAD_CAT_ID', 9)
  if (number !== null) return String(number)
  warn(fields.lineOf('NORAD_CAT_ID'), 'no-catalogue-number', 'NORAD_CAT_ID is missing, so the set cannot be matched to a spacecraft by number. Add it if the object has one.')
  return null
}

/** The standard's word for a name or a designator that is not known. */
const isUnknown = (text: string) => text.toUpperCase() === 'UNKNOWN'

function readName(fields: OmmFields, warn: Warn): string | null {
  const raw = fields.text('OBJECT_NAME')
  if (raw !== null && !isUnknown(raw)) return cleanName(raw, fields.lineOf('OBJECT_NAME'), warn)
  warn(fields.lineOf('OBJECT_NAME'), 'no-name', `OBJECT_NAME is ${raw === null ? 'missing' : quote(raw)}; the set is known by its number alone. Add it if the object has a name.`)
  return null
}

/** Short texts that are stored beside the numbers. */
function readLabel(fields: OmmFields, key: string, longest: number): string | null {
  const text = fields.text(key)
  if (text === null) return null
  if (text.length > longest || !/^[\x20-\x7E]+$/.test(text)) throw new SetRefusal(fields.lineOf(key), 'text', `${key} reads ${quote(text)}: up to ${longest} plain characters belong there. Correct it, or leave the keyword out.`)
  return text
}

function readDesignator(fields: OmmFields): string | null {
  const text = readLabel(fields, 'OBJECT_ID', 40)
  if (text === null || isUnknown(text)) return null
  return /^\d{4}-\d{3}[A-Za-z]{1,3}$/.test(text) ? text.toUpperCase() : text
}

/** The name for notes about a set, before anything of it has been checked. */
export function nameOf(entries: readonly OmmEntry[]): string | null {
  const named = entries.find(entry => entry.key === 'OBJECT_NAME')
  return named?.value ? cleanName(named.value, named.line, () => {}) : null
}

/**
 * One OMM, whatever its notation (CCSDS 502.0-B-3, tables 4-1 to 4-3). Conventions, then each field, then the ranges, so
 * that the reason given is the most telling one.
 * @throws SetRefusal
 */
export function parseOmm(entries: readonly OmmEntry[], line: number, extent: OmmExtent, warn: Warn): MeanElements {
  const fields = new OmmFields(entries, line, warn)
  if (extent === 'message') checkHeader(fields, warn)
  checkConventions(fields, warn)
  const elements: MeanElements = {
    name: readName(fields, warn),
    catalogueNumber: readCatalogueNumber(fields, warn),
    designator: readDesignator(fields),
    epochUtcUs: readEpoch(fields, warn),
    meanMotionRevPerDay: fields.requiredNumber('MEAN_MOTION'),
    eccentricity: fields.requiredNumber('ECCENTRICITY'),
    inclinationDeg: fields.requiredNumber('INCLINATION'),
    raanDeg: fields.requiredNumber('RA_OF_ASC_NODE'),
    argPericenterDeg: fields.requiredNumber('ARG_OF_PERICENTER'),
    meanAnomalyDeg: fields.requiredNumber('MEAN_ANOMALY'),
    bstar: fields.requiredNumber('BSTAR'),
    meanMotionDot: fields.requiredNumber('MEAN_MOTION_DOT'),
    meanMotionDdot: fields.requiredNumber('MEAN_MOTION_DDOT'),
    classification: readLabel(fields, 'CLASSIFICATION_TYPE', 8)?.toUpperCase() ?? 'U',
    elementSetNumber: fields.whole('ELEMENT_SET_NO', 9),
    revolutionAtEpoch: fields.whole('REV_AT_EPOCH', 9),
  }
  checkRanges(elements, key => fields.lineOf(KEYWORDS[key]))
  return elements
}
