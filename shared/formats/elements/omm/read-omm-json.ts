import type { MeanElements } from '../../../physics/types'
import { cleanName } from '../clean-name'
import type { JsonLimits, JsonObject, JsonValue } from '../json/json-value'
import { readJsonItems } from '../json/strict-json'
import { checkRanges } from '../ranges'
import type { Warn } from '../reading'
import { SetRefusal } from '../reading'
import type { SetCollector } from '../set-collector'
import { quote } from '../show-value'
import { checkConventions } from './conventions'
import { readOmmEpoch } from './epoch'
import { OmmFields } from './fields'

const LIMITS: JsonLimits = { depth: 16, members: 1000, characters: 100_000 }

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
  if (!epoch.ok) throw new SetRefusal(fields.lineOf('EPOCH'), 'epoch', `EPOCH reads ${quote(text)}. ${epoch.message}`)
  if (epoch.warning) warn(fields.lineOf('EPOCH'), epoch.warning.code, epoch.warning.message)
  return epoch.epochUtcUs
}

function readCatalogueNumber(fields: OmmFields, warn: Warn): string | null {
  const number = fields.whole('NORAD_CAT_ID', 9)
  if (number !== null) return String(number)
  warn(fields.lineOf('NORAD_CAT_ID'), 'no-catalogue-number', 'NORAD_CAT_ID is missing, so the set cannot be matched to a spacecraft by number. Add it if the object has one.')
  return null
}

/** Short texts that are stored beside the numbers. */
function readLabel(fields: OmmFields, key: string, longest: number): string | null {
  const text = fields.text(key)
  if (text === null) return null
  if (text.length > longest || !/^[\x20-\x7E]+$/.test(text)) throw new SetRefusal(fields.lineOf(key), 'text', `${key} reads ${quote(text)}: up to ${longest} plain characters belong there. Correct it, or leave the keyword out.`)
  return text
}

function parseOmm(object: JsonObject, warn: Warn): MeanElements {
  const fields = new OmmFields(object)
  checkConventions(fields, warn)
  const rawName = fields.text('OBJECT_NAME')
  if (rawName === null) warn(object.line, 'no-name', 'OBJECT_NAME is missing; the set is known by its number alone. Add it if the object has a name.')
  const elements: MeanElements = {
    name: rawName === null ? null : cleanName(rawName, fields.lineOf('OBJECT_NAME'), warn),
    catalogueNumber: readCatalogueNumber(fields, warn),
    designator: readLabel(fields, 'OBJECT_ID', 40),
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
    classification: readLabel(fields, 'CLASSIFICATION_TYPE', 8) ?? 'U',
    elementSetNumber: fields.whole('ELEMENT_SET_NO', 9),
    revolutionAtEpoch: fields.whole('REV_AT_EPOCH', 9),
  }
  checkRanges(elements, key => fields.lineOf(KEYWORDS[key]))
  return elements
}

const KIND_IN_WORDS = { null: 'null', boolean: 'true or false', number: 'a number', string: 'a text', array: 'an array' } as const

/** The name for notes about a set, before anything of it has been checked. */
function nameOf(item: JsonValue): string | null {
  if (item.kind !== 'object') return null
  const value = item.members.find(member => member.key === 'OBJECT_NAME')?.value
  return value?.kind === 'string' ? cleanName(value.value, item.line, () => {}) : null
}

/**
 * Reads Orbit Mean-Elements Messages (CCSDS 502.0-B-3, tables 4-1 to 4-3) as flat JSON: one object or an array of them,
 * values as numbers or numeric texts.
 * @throws JsonError when the text is not JSON
 */
export function readOmmJson(text: string, collector: SetCollector): void {
  for (const item of readJsonItems(text, LIMITS)) {
    if (item.kind !== 'object') {
      collector.refuse(item.line, null, 'not-an-object', `Here stands ${KIND_IN_WORDS[item.kind]} where an object with OMM keywords belongs. Write one object, or one array of objects.`)
      continue
    }
    collector.take({ line: item.line, name: nameOf(item), text: () => text.slice(item.start, item.end) }, warn => parseOmm(item, warn))
  }
}
