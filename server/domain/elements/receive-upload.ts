import type { Hash } from 'node:crypto'
import { createHash } from 'node:crypto'
import { and, eq, sql } from 'drizzle-orm'
import { elementUploadParts, elementUploads } from '~~/server/database/schema'
import type { Deps } from '../context'
import { personId } from '../context'
import { DomainError } from '../errors'
import { displayFileName } from './storable-text'
import { readAtOnceBytes } from './upload-columns'
import { inParts } from './upload-parts'

export interface UploadOrigin {
  source: 'file' | 'paste' | 'api' | 'folder' | 'demo'
  fileName?: string | null
}

/** All of an upload, sent: a small one is still held, a large one is stored already in the state `reading`. */
export type Received =
  | { kind: 'held', bytes: Buffer, sha256: string }
  | { kind: 'stored', id: string, totalBytes: number, sha256: string }

/**
 * Takes an upload in as it comes, part by part: what is larger than a megabyte goes straight to the database, so that
 * memory does not grow with it. What is broken off, or grows past its limit, stays on record as failed, without its parts.
 * @throws what the pieces throw, and `conflict` where somebody cancels it meanwhile
 */
export async function receiveUpload(deps: Deps, origin: UploadOrigin, pieces: AsyncIterable<Uint8Array> | Iterable<Uint8Array>): Promise<Received> {
  const hash = createHash('sha256')
  const parts = inParts(pieces)
  const first = await parts.next()
  const opening = first.done ? Buffer.alloc(0) : first.value
  hash.update(opening)
  const second = opening.length < readAtOnceBytes ? null : await parts.next()
  if (!second || second.done) return { kind: 'held', bytes: opening, sha256: hash.digest('hex') }

  const id = await openUpload(deps, origin)
  try {
    const totalBytes = await keepParts(deps, id, hash, opening, second.value, parts)
    const sha256 = hash.digest('hex')
    const [whole] = await deps.db.update(elementUploads).set({ state: 'reading', sha256, totalBytes }).where(and(eq(elementUploads.id, id), eq(elementUploads.state, 'receiving'))).returning({ id: elementUploads.id })
    if (!whole) throw cancelled()
    return { kind: 'stored', id, totalBytes, sha256 }
  }
  catch (error) {
    await giveUp(deps, id, error instanceof DomainError && error.code === 'too-large' ? error.message : 'The sending was broken off; nothing of it was kept. Upload it again.').catch(() => {})
    throw error
  }
}

/** Stores a small upload whole, in the state `reading`. */
export async function storeHeld(deps: Deps, origin: UploadOrigin, { bytes, sha256 }: { bytes: Buffer, sha256: string }): Promise<string> {
  return deps.db.transaction(async (tx) => {
    const [row] = await tx.insert(elementUploads).values({ ...valuesOf(deps, origin), state: 'reading', sha256, totalBytes: bytes.length }).returning({ id: elementUploads.id })
    await tx.insert(elementUploadParts).values({ uploadId: row!.id, number: 0, bytes })
    return row!.id
  })
}

/** Takes an upload off the record that was received and is not to be read: the answer to it has been given before. */
export async function forgetUpload({ db }: Pick<Deps, 'db'>, id: string): Promise<void> {
  await db.delete(elementUploads).where(and(eq(elementUploads.id, id), eq(elementUploads.state, 'reading')))
}

function valuesOf({ actor, now }: Deps, { source, fileName }: UploadOrigin) {
  return { by: actor.name, personId: personId(actor), fileName: displayFileName(fileName), source, createdAt: now }
}

async function openUpload(deps: Deps, origin: UploadOrigin): Promise<string> {
  const [row] = await deps.db.insert(elementUploads).values({ ...valuesOf(deps, origin), state: 'receiving', totalBytes: 0 }).returning({ id: elementUploads.id })
  return row!.id
}

async function keepParts({ db }: Deps, id: string, hash: Hash, opening: Buffer, second: Buffer, others: AsyncIterable<Buffer>): Promise<number> {
  let totalBytes = 0
  let number = 0
  const keep = async (bytes: Buffer) => {
    totalBytes += bytes.length
    const { rows } = await db.execute(sql`
      WITH open AS (UPDATE element_uploads SET total_bytes = ${totalBytes} WHERE id = ${id}::uuid AND state = 'receiving' RETURNING id)
      INSERT INTO element_upload_parts (upload_id, number, bytes) SELECT id, ${number++}, ${bytes} FROM open RETURNING number`)
    if (rows.length === 0) throw cancelled()
  }
  await keep(opening)
  hash.update(second)
  await keep(second)
  for await (const part of others) {
    hash.update(part)
    await keep(part)
  }
  return totalBytes
}

const cancelled = () => new DomainError('conflict', 'This upload was cancelled while it was being sent; nothing of it was kept.')

async function giveUp({ db, now }: Deps, id: string, detail: string): Promise<void> {
  await db.transaction(async (tx) => {
    await tx.update(elementUploads).set({ state: 'failed', detail, finishedAt: now }).where(and(eq(elementUploads.id, id), eq(elementUploads.state, 'receiving')))
    await tx.delete(elementUploadParts).where(eq(elementUploadParts.uploadId, id))
  })
}
