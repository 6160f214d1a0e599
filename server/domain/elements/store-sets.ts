import { createHash } from 'node:crypto'
import { and, eq, inArray, isNull } from 'drizzle-orm'
import type { ReadSet } from '#shared/formats/elements/read-elements'
import type { UploadNote } from '~~/server/database/schema'
import { elementSets } from '~~/server/database/schema'
import { recordAudits } from '../audit'
import type { Deps } from '../context'
import { createMatcher } from './match-spacecraft'
import { storableNote, storableText } from './storable-text'

const rowsAtOnce = 500
const sha256 = (text: string) => createHash('sha256').update(text).digest('hex')

/** What makes a set the same set, in whatever notation it comes again. */
export const contentSha256 = (set: ReadSet) => sha256(set.contentKey)

export interface Stored { accepted: number, alreadyHeld: number, warnings: UploadNote[] }

/**
 * Stores the sets of one upload inside the caller's transaction; those that are held already are left as they are.
 * A held set that nobody claimed is given to the spacecraft that it matches by now.
 */
export async function storeSets(deps: Deps, uploadId: string, sets: readonly ReadSet[], onProgress: (share: number) => void): Promise<Stored> {
  const { db, now } = deps
  const match = await createMatcher(db)
  const warnings: UploadNote[] = []
  // In one order for everybody: two uploads of the same sets then wait for each other instead of blocking each other.
  const keyed = sets.map(set => ({ set, key: contentSha256(set) })).sort((a, b) => a.key < b.key ? -1 : 1)
  let accepted = 0
  for (let start = 0; start < keyed.length; start += rowsAtOnce) {
    const chunk = keyed.slice(start, start + rowsAtOnce)
    const matches = new Map(chunk.map(({ set, key }) => [key, match(set.elements, set.line)]))
    const inserted = await db.insert(elementSets).values(chunk.map(({ set, key }) => {
      const found = matches.get(key)
      const { elements } = set
      const name = elements.name === null ? null : storableText(elements.name)
      return {
        uploadId,
        spacecraftId: found?.spacecraftId ?? null,
        name,
        catalogueNumber: elements.catalogueNumber,
        designator: elements.designator,
        epoch: new Date(Math.floor(elements.epochUtcUs / 1000)),
        epochUtcUs: elements.epochUtcUs,
        elements: { ...elements, name },
        originalText: storableText(set.text),
        lineNumber: set.line,
        sha256: sha256(set.text),
        contentSha256: key,
        warnings: [...set.warnings, ...(found?.warning ? [found.warning] : [])].map(storableNote),
        createdAt: now,
      }
    })).onConflictDoNothing({ target: elementSets.contentSha256 }).returning({ key: elementSets.contentSha256 })
    accepted += inserted.length
    for (const { key } of inserted) {
      const warning = matches.get(key)?.warning
      if (warning) warnings.push(storableNote(warning))
    }
    const fresh = new Set(inserted.map(row => row.key))
    await claimHeld(deps, chunk.flatMap(({ key }) => fresh.has(key) ? [] : [{ key, spacecraftId: matches.get(key)?.spacecraftId }]))
    onProgress((start + chunk.length) / keyed.length)
  }
  return { accepted, alreadyHeld: sets.length - accepted, warnings }
}

async function claimHeld(deps: Deps, held: readonly { key: string, spacecraftId: string | undefined }[]): Promise<void> {
  const wanted = new Map(held.flatMap(({ key, spacecraftId }) => spacecraftId ? [[key, spacecraftId] as const] : []))
  if (wanted.size === 0) return
  const unclaimed = await deps.db.select({ id: elementSets.id, key: elementSets.contentSha256 }).from(elementSets)
    .where(and(inArray(elementSets.contentSha256, [...wanted.keys()]), isNull(elementSets.spacecraftId), eq(elementSets.state, 'waiting')))
    .orderBy(elementSets.id).for('update')
  for (const { id, key } of unclaimed) await deps.db.update(elementSets).set({ spacecraftId: wanted.get(key)! }).where(eq(elementSets.id, id))
  await recordAudits(deps, unclaimed.map(({ id, key }) => ({ action: 'element-set.assign', entityKind: 'element-set', entityId: id, before: { spacecraftId: null }, after: { spacecraftId: wanted.get(key)! } })))
}
