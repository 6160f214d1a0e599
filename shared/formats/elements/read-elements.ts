import { checkFileName } from './check-file-name'
import type { DecodedText } from './decode-text'
import { decodeText } from './decode-text'
import { JsonError } from './json/json-value'
import { readOmmCsv } from './omm/read-omm-csv'
import { readOmmJson } from './omm/read-omm-json'
import { readOmmKvn } from './omm/read-omm-kvn'
import { readOmmXml } from './omm/read-omm-xml'
import type { ElementFormat, ElementReading, LineNote, ReadSet, ReadingEnd, SetSink } from './reading'
import { FileRefusal, refusedWhole } from './reading'
import { recogniseFormat } from './recognise-format'
import { SetCollector, TooManySets } from './set-collector'
import { readTle } from './tle/read-tle'
import { XmlError } from './xml/xml-error'

export type { ElementFormat, ElementReading, LineNote, ReadSet, ReadingEnd, SetSink } from './reading'

/** The most sets that one upload may bring, unless the caller says less. */
export const MOST_SETS = 200_000

export interface ReadElementsOptions {
  /** For the warning about epochs ahead; milliseconds since 1970, UTC. */
  readonly nowMs: number
  readonly limit?: number
  /** Only to warn where it says another notation than the content is in. */
  readonly fileName?: string | null
}

const READERS: Record<ElementFormat, (text: string, collector: SetCollector) => void> = {
  'tle': readTle,
  'omm-kvn': readOmmKvn,
  'omm-xml': readOmmXml,
  'omm-json': readOmmJson,
  'omm-csv': readOmmCsv,
}

const MEND = 'Nothing was taken from the file: mend it there, or save it again from its source.'
const LIMIT = 'That is beyond the limit of this reader; nothing was taken from the file.'
const MENDS: Record<JsonError['code'] | XmlError['code'], string> = {
  'json': MEND,
  'json-limit': LIMIT,
  'xml': MEND,
  'xml-dtd': 'Nothing was taken from the file: save it without a DTD and upload that.',
  'xml-entity': 'Nothing was taken from the file: write the character itself, or its number, and upload that.',
  'xml-limit': LIMIT,
}

/**
 * Reads an upload of element sets: TLE in two or three lines (Alpha-5 too) or OMM as KVN, XML, JSON or CSV (CCSDS
 * 502.0-B-3), known by its content. Each set is read, refused with line and reason, or counted as repeated; one bad set never loses the good ones.
 * Refused whole: what is no such file, broken JSON or XML, more sets than the limit, and a file of which no set can be taken.
 * Never throws, whatever the bytes.
 */
export function readElements(bytes: Uint8Array, options: ReadElementsOptions): ElementReading {
  const [sets, refusals, warnings]: [ReadSet[], LineNote[], LineNote[]] = [[], [], []]
  const end = readElementsInto(bytes, options, { set: (set) => { sets.push(set) }, refusal: (note) => { refusals.push(note) }, warning: (note) => { warnings.push(note) } })
  if (end.kind === 'refused') return { ...end, errors: end.errors ?? refusals }
  return { kind: 'read', format: end.format, sets, refusals, warnings, repeated: end.repeated }
}

/** The same, handing each finding to a sink as soon as it is made, so that a large file is never held as sets. */
export function readElementsInto(bytes: Uint8Array, options: ReadElementsOptions, sink: SetSink): ReadingEnd {
  return readDecodedInto(decodeText(bytes), options, sink)
}

/** The same from text: who has decoded a large file need not keep its bytes. */
export function readDecodedInto(decoded: DecodedText, { nowMs, limit = MOST_SETS, fileName = null }: ReadElementsOptions, sink: SetSink): ReadingEnd {
  if (!decoded.ok) return refusedWhole(1, decoded.code, decoded.message)
  const recognised = recogniseFormat(decoded.text)
  if (!recognised.ok) return refusedWhole(recognised.line, recognised.code, recognised.message)
  const collector = new SetCollector(nowMs, limit, sink)
  const misnamed = fileName === null ? null : checkFileName(fileName, recognised.format)
  if (misnamed) collector.warn(1, 'file-name', misnamed)
  try {
    READERS[recognised.format](decoded.text, collector)
  }
  catch (error) {
    if (error instanceof TooManySets) return refusedWhole(error.line, 'too-many-sets', error.message)
    if (error instanceof FileRefusal) return refusedWhole(error.line, error.code, error.message)
    if (error instanceof JsonError || error instanceof XmlError) {
      const notation = error instanceof JsonError ? 'JSON' : 'XML'
      return refusedWhole(error.line, error.code, `Not readable as ${notation} at line ${error.line}, column ${error.column}: ${error.message}. ${MENDS[error.code]}`)
    }
    throw error
  }
  return collector.finish(recognised.format)
}
