import type { JsonLimits, JsonMember, JsonValue } from '../json/json-value'
import { readJsonItems } from '../json/strict-json'
import type { SetCollector } from '../set-collector'
import type { OmmEntry } from './fields'
import { nameOf, parseOmm } from './parse-omm'

const LIMITS: JsonLimits = { depth: 16, members: 1000, characters: 100_000 }

const KIND_IN_WORDS = { null: 'null', boolean: 'true or false', number: 'a number', string: 'a text', array: 'an array', object: 'an object' } as const

function toEntry({ key, line, value }: JsonMember): OmmEntry {
  if (value.kind === 'string') return { key, line, value: value.value }
  if (value.kind === 'number') return { key, line, value: value.text }
  if (value.kind === 'null') return { key, line, value: null }
  return { key, line, value: null, odd: KIND_IN_WORDS[value.kind] }
}

const entriesOf = (item: JsonValue): OmmEntry[] => item.kind === 'object' ? item.members.map(toEntry) : []

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
    const entries = entriesOf(item)
    collector.take({ line: item.line, name: nameOf(entries), text: () => text.slice(item.start, item.end) }, warn => parseOmm(entries, item.line, 'flat', warn))
  }
}
