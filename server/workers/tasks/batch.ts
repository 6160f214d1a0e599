import { createHash } from 'node:crypto'
import type { LineNote, ReadSet, ReadingEnd } from '#shared/formats/elements/read-elements'
import { readElementsInto } from '#shared/formats/elements/read-elements'
import type { Named } from '~~/server/domain/elements/match-spacecraft'
import { createMatcher } from '~~/server/domain/elements/match-spacecraft'
import { storableNote, storableText } from '~~/server/domain/elements/storable-text'

/** Some findings of a reading, as JSON texts that the database takes apart itself: nothing else has to look at each set. */
export interface Batch {
  /** Rows of `element_sets`, in the order of the file. */
  readonly sets: string
  /** Rows of `element_upload_notes`. */
  readonly notes: string
  readonly setCount: number
  readonly noteCount: number
  /** Of the sets, those that match a spacecraft: `{ contentSha256, spacecraftId }`. */
  readonly matched: string
  readonly matchedCount: number
  /** How far the reading has come, 0 to 1. */
  readonly share: number
}

export const rowsAtOnce = 1000
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
export function makeBatches(bytes: Uint8Array, { nowMs, fileName, fleet }: BatchOptions, hand: (batch: Batch) => void): ReadingEnd {
  const match = createMatcher(fleet)
  const lines = countLines(bytes)
  const size = Math.max(1, bytes.length)
  let [sets, notes, matched]: [unknown[], unknown[], unknown[]] = [[], [], []]
  let characters = 0
  let line = 0
  const flush = () => {
    if (sets.length + notes.length === 0) return
    // A text of one line moves on by what its sets have taken of it.
    const share = Math.min(1, Math.max(lines > 1 ? line / lines : 0, characters / size))
    hand({ sets: JSON.stringify(sets), notes: JSON.stringify(notes), matched: JSON.stringify(matched), setCount: sets.length, noteCount: notes.length, matchedCount: matched.length, share })
    ;[sets, notes, matched] = [[], [], []]
  }
  const note = (kind: 'refusal' | 'warning') => (found: LineNote) => {
    notes.push({ kind, ...storableNote(found) })
    line = Math.max(line, found.line)
    if (notes.length >= rowsAtOnce) flush()
  }
  const end = readElementsInto(bytes, { nowMs, fileName }, {
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
    elements: { ...elements, name },
    originalText: storableText(text),
    sha256: sha256(text),
    contentSha256: contentSha256({ contentKey }),
    warnings: [...warnings, ...(matchWarning ? [matchWarning] : [])].map(storableNote),
    matchWarning: matchWarning && storableNote(matchWarning),
  }
}

/** Line feeds, or carriage returns where there are none; close enough to tell how far a reading has come. */
function countLines(bytes: Uint8Array): number {
  let [feeds, returns] = [0, 0]
  for (const byte of bytes) {
    if (byte === 0x0A) feeds++
    else if (byte === 0x0D) returns++
  }
  return Math.max(feeds, returns)
}
