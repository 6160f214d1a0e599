import type { MeanElements } from '../../../physics/types'
import { writeOmmCsv, writeOmmJson, writeOmmKvn, writeOmmXml } from './write-omm'
import { writeTle } from './write-tle'
import type { ElementNotation, MessageOrigin, WrittenElements } from './written'

export { ELEMENT_NOTATIONS } from './written'
export type { ElementNotation, MessageOrigin, WrittenElements } from './written'
export { whyNoTle } from './write-tle'

/** Media type and file ending of each notation. */
export const NOTATION_FILES: Readonly<Record<ElementNotation, { readonly mediaType: string, readonly ending: string }>> = {
  tle: { mediaType: 'text/plain', ending: 'tle' },
  kvn: { mediaType: 'text/plain', ending: 'kvn' },
  xml: { mediaType: 'application/xml', ending: 'xml' },
  json: { mediaType: 'application/json', ending: 'json' },
  csv: { mediaType: 'text/csv', ending: 'csv' },
}

/**
 * Element sets in one notation, UTF-8, as the reader of this product and others read them. Every OMM reads back to the same
 * numbers and the epoch to the microsecond; a TLE to its columns, and `changed` names what it rounds.
 * @returns not ok where a TLE cannot carry one of the sets
 */
export function writeElements(sets: readonly MeanElements[], notation: ElementNotation, origin: MessageOrigin): WrittenElements {
  switch (notation) {
    case 'tle': return writeTles(sets)
    case 'kvn': return { ok: true, text: writeOmmKvn(sets, origin), changed: [] }
    case 'xml': return { ok: true, text: writeOmmXml(sets, origin), changed: [] }
    case 'json': return { ok: true, text: writeOmmJson(sets), changed: [] }
    case 'csv': return { ok: true, text: writeOmmCsv(sets), changed: [] }
  }
}

function writeTles(sets: readonly MeanElements[]): WrittenElements {
  const texts: string[] = []
  const changed = new Set<string>()
  for (const e of sets) {
    const one = writeTle(e)
    if (!one.ok) return one
    texts.push(one.text)
    for (const keyword of one.changed) changed.add(keyword)
  }
  return { ok: true, text: texts.join(''), changed: [...changed] }
}
