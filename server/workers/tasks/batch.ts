import { createHash } from 'node:crypto'
import type { LineNote, ReadSet, ReadingEnd } from '#shared/formats/elements/read-elements'
import type { DecodedText } from '#shared/formats/elements/decode-text'
import { readDecodedInto } from '#shared/formats/elements/read-elements'
import type { Named } from '~~/server/domain/elements/match-spacecraft'
import { createMatcher } from '~~/server/domain/elements/match-spacecraft'
import { storableNote, storableText } from '~~/server/domain/elements/storable-text'

/** JSON as UTF-8: as a string it would fill the heap of the thread that only passes it on. */
export type JsonBytes = Uint8Array<ArrayBuffer>

/** Some findings of a reading, as JSON that the database takes apart itself: nothing else has to look at each set. */
export interface Batch {
  /** Rows of `element_sets`, in the order of the file. */
  readonly sets: JsonBytes
  /** Rows of `element_upload_notes`. */
  readonly notes: JsonBytes
  readonly setCount: number
  readonly noteCount: number
  /** Of the sets, those that match a spacecraft: `{ contentSha256, spacecraftId }`. */
  readonly matched: JsonBytes
  readonly matchedCount: number
  /** How far the reading has come, 0 to 1. */
  readonly share: number
}

export const rowsAtOnce = 1000
export const jsonBytes = (rows: readonly unknown[]): JsonBytes => new TextEncoder().encode(JSON.stringify(rows))
const sha256 = (text: string) => createHash('sha256').update(text).digest('hex')

/** What makes a set the same set, in whatever notation it comes again. */
export const contentSha256 = (set: Pick<ReadSet, 'contentKey'>) => sha256(set.contentKey)

export interface BatchOptions {
  /** For the warning about epochs ahead. */
  readonly nowMs: number
  /** Only to warn where it says another notation than the content is in. */
  readonly fileName: string | null
  readonly fleet: readonly Named[]
}

/** Reads an upload and gathers what comes out into batches of a thousand. */
export function makeBatches(decoded: DecodedText, { nowMs, fileName, fleet }: BatchOptions, hand: (batch: Batch) => void): ReadingEnd {
  const match = createMatcher(fleet)
  const text = decoded.ok ? decoded.text : ''
  const lines = countLines(text)
  const size = Math.max(1, text.length)
  let [sets, notes, matched]: [unknown[], unknown[], unknown[]] = [[], [], []]
  let characters = 0
  let line = 0
  const flush = () => {
    if (sets.length + notes.length === 0) return
    // A text of one line moves on by what its sets have taken of it.
    const share = Math.min(1, Math.max(lines > 1 ? line / lines : 0, characters / size))
    hand({ sets: jsonBytes(sets), notes: jsonBytes(notes), matched: jsonBytes(matched), setCount: sets.length, noteCount: notes.length, matchedCount: matched.length, share })
    ;[sets, notes, matched] = [[], [], []]
  }
  const note = (kind: 'refusal' | 'warning') => (found: LineNote) => {
    notes.push({ kind, ...storableNote(found) })
    line = Math.max(line, found.line)
    if (notes.length >= rowsAtOnce) flush()
  }
  const end = readDecodedInto(decoded, { nowMs, fileName }, {
    refusal: note('refusal'),
    warning: note('warning'),
    set: (set) => {
      const found = match(set.elements, set.line)
      const row = rowOf(set, found?.spacecraftId ?? null, found?.warning ?? null)
      sets.push(row)
      if (found) matched.push({ contentSha256: row.contentSha256, spacecraftId: found.spacecraftId })
      characters += set.text.length
      line = Math.max(line, set.line)
      if (sets.length >= rowsAtOnce) flush()
    },
  })
  flush()
  return end
}

function rowOf({ line, elements, text, contentKey, warnings }: ReadSet, spacecraftId: string | null, matchWarning: LineNote | null) {
  const name = elements.name === null ? null : storableText(elements.name)
  return {
    line, name, spacecraftId,
    catalogueNumber: elements.catalogueNumber,
    designator: elements.designator,
    epoch: new Date(Math.floor(elements.epochUtcUs / 1000)).toISOString(),
    epochUtcUs: elements.epochUtcUs,
    elements: { ...elements, name, classification: storableText(elements.classification) },
    originalText: storableText(text),
    sha256: sha256(text),
    contentSha256: contentSha256({ contentKey }),
    warnings: [...warnings, ...(matchWarning ? [matchWarning] : [])].map(storableNote),
    matchWarning: matchWarning && storableNote(matchWarning),
  }
}

/** Line feeds, or carriage returns where there are none; close enough to tell how far a reading has come. */
function countLines(text: string): number {
  const count = (mark: string) => {
    let found = 0
    for (let at = text.indexOf(mark); at >= 0; at = text.indexOf(mark, at + 1)) found++
    return found
  }
  return count('\n') || count('\r')
}
