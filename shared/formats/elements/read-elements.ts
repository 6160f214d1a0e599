import { decodeText } from './decode-text'
import { JsonError } from './json/json-value'
import { readOmmJson } from './omm/read-omm-json'
import type { ElementReading } from './reading'
import { refusedWhole } from './reading'
import { recogniseFormat } from './recognise-format'
import { SetCollector, TooManySets } from './set-collector'
import { readTle } from './tle/read-tle'

export type { ElementFormat, ElementReading, LineNote, ReadSet } from './reading'

/** The most sets that one upload may bring, unless the caller says less. */
export const MOST_SETS = 200_000

export interface ReadElementsOptions {
  /** For the warning about epochs ahead; milliseconds since 1970, UTC. */
  readonly nowMs: number
  readonly limit?: number
}

/**
 * Reads an upload of element sets: TLE in two or three lines (Alpha-5 too) or OMM as JSON (CCSDS 502.0-B-3), known by its
 * content. Each set is read, refused with line and reason, or counted as repeated; one bad set never loses the good ones.
 * Refused whole: what is no such file, broken JSON, more sets than the limit, and a file of which no set can be taken.
 * Never throws, whatever the bytes.
 */
export function readElements(bytes: Uint8Array, { nowMs, limit = MOST_SETS }: ReadElementsOptions): ElementReading {
  const decoded = decodeText(bytes)
  if (!decoded.ok) return refusedWhole(1, decoded.code, decoded.message)
  const recognised = recogniseFormat(decoded.text)
  if (!recognised.ok) return refusedWhole(recognised.line, recognised.code, recognised.message)
  const collector = new SetCollector(nowMs, limit)
  try {
    if (recognised.format === 'tle') readTle(decoded.text, collector)
    else readOmmJson(decoded.text, collector)
  }
  catch (error) {
    if (error instanceof TooManySets) return refusedWhole(error.line, 'too-many-sets', error.message)
    if (error instanceof JsonError) {
      const mend = error.code === 'json' ? 'Nothing was taken from the file: mend it there, or save it again from its source.' : 'That is beyond the limit of this reader; nothing was taken from the file.'
      return refusedWhole(error.line, error.code, `Not readable as JSON at line ${error.line}, column ${error.column}: ${error.message}. ${mend}`)
    }
    throw error
  }
  return collector.finish(recognised.format)
}
