import { eq } from 'drizzle-orm'
import type { ReadingEnd } from '#shared/formats/elements/read-elements'
import type { Db } from '~~/server/database/client'
import { elementUploads } from '~~/server/database/schema'
import { readInBatches } from '~~/server/workers/read-batches'
import type { Deps } from '../context'
import { namedSpacecraft } from './named-spacecraft'
import type { Stored } from './store-batch'
import { storeBatch } from './store-batch'
import type { UploadRow } from './upload-columns'
import { readAtOnceBytes } from './upload-columns'
import { originalOf } from './upload-parts'

const tickMs = 500

/** Somebody has asked for the upload to be given up. */
export class Cancelled extends Error {}

/** The file is none that sets can be taken from; what was stored of it must be taken back. */
export class RefusedWhole extends Error {
  constructor(readonly end: Extract<ReadingEnd, { kind: 'refused' }>) {
    super(end.detail)
  }
}

/**
 * Reads an upload and stores batch by batch what comes out, in the caller's transaction. How far it has come is told in
 * the upload's row by another connection (`outside`), for every server to see; by the same way a cancel arrives.
 * @throws Cancelled; RefusedWhole where the file breaks off or is too much. Where each set was refused by itself it does
 *   not: the reasons are stored then.
 */
export async function storeReading(deps: Deps, outside: Db, { id, totalBytes, createdAt, fileName }: UploadRow): Promise<Stored & { end: ReadingEnd }> {
  const fleet = await namedSpacecraft(deps.db)
  const reading = readInBatches({ parts: originalOf(deps.db, id), totalBytes, nowMs: createdAt.getTime(), fileName, fleet }, totalBytes > readAtOnceBytes)
  const stored = { accepted: 0, alreadyHeld: 0 }
  let tickedAt = performance.now()
  for (;;) {
    const next = await reading.next()
    if (next.done) {
      if (next.value.kind === 'refused' && next.value.errors) throw new RefusedWhole(next.value)
      return { ...stored, end: next.value }
    }
    try {
      const more = await storeBatch(deps, id, next.value)
      stored.accepted += more.accepted
      stored.alreadyHeld += more.alreadyHeld
      if (performance.now() - tickedAt >= tickMs) {
        tickedAt = performance.now()
        await tellProgress(outside, id, Math.floor(next.value.share * totalBytes))
      }
    }
    catch (error) {
      // The thread that reads is not to go on.
      await reading.return(null as never)
      throw error
    }
  }
}

async function tellProgress(outside: Db, id: string, readBytes: number): Promise<void> {
  const [row] = await outside.update(elementUploads).set({ readBytes }).where(eq(elementUploads.id, id)).returning({ cancelRequestedAt: elementUploads.cancelRequestedAt })
  if (row?.cancelRequestedAt) throw new Cancelled()
}
