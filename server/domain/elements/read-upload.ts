import { and, eq, inArray, isNull } from 'drizzle-orm'
import type { LineNote } from '#shared/formats/elements/read-elements'
import type { Db } from '~~/server/database/client'
import { databaseNow } from '~~/server/database/client'
import { elementUploadNotes, elementUploads } from '~~/server/database/schema'
import { jsonBytes } from '~~/server/workers/tasks/batch'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { pointOutMisfits } from './point-out-misfits'
import { storableNote, storableText } from './storable-text'
import { storeNotes } from './store-batch'
import { Cancelled, RefusedWhole, storeReading } from './store-reading'
import { inTurn, takeLock } from './storing-turn'
import type { UploadRow } from './upload-columns'
import { inHand } from './upload-columns'

export type UploadOutcome =
  | { kind: 'finished' | 'cancelled' }
  | { kind: 'refused', detail: string, errors: readonly LineNote[], count: number }
  /** Another server, or another call, has it in hand or has finished it. */
  | { kind: 'elsewhere' }

/** So many reasons go into the answer to a small file that is refused whole; its report has all. */
export const errorsShown = 100

/** Held by whoever stores the upload; the row itself stays free for what shows and cancels it. */
export const claimOf = (uploadId: string): string => `element-upload:${uploadId}`

/**
 * Reads a received upload and stores all its sets, or none, in one transaction with its report and its row of the
 * trail. A file that is refused whole ends as `failed`; its original stays. May be called again after a crash.
 */
export async function readUpload(deps: Deps, uploadId: string): Promise<UploadOutcome> {
  try {
    return await inTurn(deps.db, async (tx) => {
      if (!await takeLock(tx, claimOf(uploadId))) return { kind: 'elsewhere' }
      const [row] = await tx.select().from(elementUploads).where(and(eq(elementUploads.id, uploadId), eq(elementUploads.state, 'reading')))
      if (!row) return { kind: 'elsewhere' }
      if (row.cancelRequestedAt) throw new Cancelled()
      return readAndFinish({ ...deps, db: tx }, deps.db, row)
    })
  }
  catch (error) {
    if (!(error instanceof Cancelled)) throw error
    await markCancelled(deps, uploadId)
    return { kind: 'cancelled' }
  }
}

async function readAndFinish(deps: Deps, outside: Db, row: UploadRow): Promise<UploadOutcome> {
  try {
    // What is stored before the file turns out to be none is taken back, and only that.
    const { end, accepted, alreadyHeld } = await deps.db.transaction(tx => storeReading({ ...deps, db: tx }, outside, row))
    if (end.kind === 'refused') return refuse(deps, row.id, end.detail)
    await pointOutMisfits(deps, row.id)
    await finish(deps, row, { state: 'finished', format: end.format, accepted, alreadyHeld, refused: end.refusals })
    return { kind: 'finished' }
  }
  catch (error) {
    if (!(error instanceof RefusedWhole)) throw error
    await storeNotes(deps, row.id, jsonBytes(error.end.errors!.map(note => ({ kind: 'refusal', ...storableNote(note) }))))
    return refuse(deps, row.id, error.end.detail)
  }

  async function refuse(deps: Deps, id: string, detail: string): Promise<UploadOutcome> {
    const refusals = and(eq(elementUploadNotes.uploadId, id), eq(elementUploadNotes.kind, 'refusal'))
    const count = await deps.db.$count(elementUploadNotes, refusals)
    await finish(deps, row, { state: 'failed', refused: count, detail: storableText(detail) })
    const errors = await deps.db.select({ line: elementUploadNotes.line, code: elementUploadNotes.code, message: elementUploadNotes.message }).from(elementUploadNotes)
      .where(refusals).orderBy(elementUploadNotes.line, elementUploadNotes.id).limit(errorsShown)
    return { kind: 'refused', detail, errors, count }
  }
}

/** @throws Cancelled where somebody was quicker than the end */
async function finish(deps: Deps, { id, totalBytes }: UploadRow, values: Partial<typeof elementUploads.$inferInsert>): Promise<void> {
  const finishedAt = await databaseNow(deps.db)
  const [row] = await deps.db.update(elementUploads).set({ ...values, readBytes: totalBytes, finishedAt })
    .where(and(eq(elementUploads.id, id), eq(elementUploads.state, 'reading'), isNull(elementUploads.cancelRequestedAt))).returning()
  if (!row) throw new Cancelled()
  await recordUpload(deps, row)
}

async function recordUpload(deps: Deps, row: UploadRow): Promise<void> {
  const { sha256, totalBytes, fileName, source, state, format, accepted, alreadyHeld, refused } = row
  await recordAudit(deps, { action: 'element-sets.upload', entityKind: 'element-upload', entityId: row.id, after: { state, source, fileName, format, totalBytes, sha256, accepted, alreadyHeld, refused } })
}

/** Ends an upload that somebody has cancelled, unless it has ended otherwise: nothing of it is stored but its original. */
export async function markCancelled(deps: Deps, uploadId: string): Promise<void> {
  await endUnstored(deps, uploadId, { state: 'cancelled', detail: 'Cancelled before it was stored; nothing of it was kept.' })
}

/** Marks an upload whose storing broke off: nothing of it was kept but its original. */
export async function markBroken(deps: Deps, uploadId: string): Promise<void> {
  await endUnstored(deps, uploadId, { state: 'failed', detail: 'The server could not store this file; nothing of it was kept. Upload it again.' })
}

async function endUnstored(deps: Deps, uploadId: string, values: { state: 'cancelled' | 'failed', detail: string }): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const finishedAt = await databaseNow(tx)
    const [row] = await tx.update(elementUploads).set({ ...values, finishedAt }).where(and(eq(elementUploads.id, uploadId), inArray(elementUploads.state, inHand))).returning()
    if (row) await recordUpload({ ...deps, db: tx }, row)
  })
}
