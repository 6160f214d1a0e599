import { setTimeout as wait } from 'node:timers/promises'
import { and, eq, getTableColumns, inArray, sql } from 'drizzle-orm'
import type { ElementReading, LineNote } from '#shared/formats/elements/read-elements'
import { readElements } from '#shared/formats/elements/read-elements'
import type { Db } from '~~/server/database/client'
import { elementUploads } from '~~/server/database/schema'
import { runTask } from '~~/server/workers/pool'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { storableNote, storableText } from './storable-text'
import { storeSets } from './store-sets'

/** Up to this size an upload is read while its sender waits. */
export const readAtOnceBytes = 1024 * 1024

export type UploadOutcome =
  | { kind: 'finished' }
  | { kind: 'refused', detail: string, errors: readonly LineNote[] }
  /** Another server, or another call, has it in hand or has finished it. */
  | { kind: 'elsewhere' }

const { original: _original, refusals: _refusals, warnings: _warnings, ...brief } = getTableColumns(elementUploads)
/** An upload in brief: without its report, and without its original, which may be 50 MB. */
export const briefColumns = brief

const unread = ['receiving', 'reading'] as const

/** Bytes read so far of the uploads that this process has in hand. */
const progress = new Map<string, number>()
export const readBytesOf = (uploadId: string): number => progress.get(uploadId) ?? 0

/** One upload is stored at a time, here and on all servers: two of the same sets would wait for each other past a statement's time limit. */
let last: Promise<unknown> = Promise.resolve()
function afterTheOthers<T>(act: () => Promise<T>): Promise<T> {
  const mine = last.then(act, act)
  last = mine.catch(() => {})
  return mine
}

const turnPauseMs = 250
const turnPatienceMs = 120_000

async function takeTurn(tx: Db): Promise<boolean> {
  const { rows } = await tx.execute<{ free: boolean }>(sql`SELECT pg_try_advisory_xact_lock(hashtext('store-element-sets')) AS free`)
  return rows[0]!.free
}

/** Comes back until it is this upload's turn; nobody holds a connection meanwhile. */
async function whenFree<T>(act: () => Promise<T | null>): Promise<T> {
  for (let waitedMs = 0; waitedMs < turnPatienceMs; waitedMs += turnPauseMs) {
    const done = await act()
    if (done !== null) return done
    await wait(turnPauseMs)
  }
  throw new DomainError('unavailable', 'Another server is storing element sets: try again in a minute.', [], 60)
}

/** Reads what was sent: a large file in a worker thread, so that requests are answered meanwhile. */
export async function readOriginal(original: Uint8Array, nowMs: number): Promise<ElementReading> {
  return original.length <= readAtOnceBytes ? readElements(original, { nowMs }) : runTask('read-elements', { original, nowMs })
}

/**
 * Reads a received upload and stores all its sets, or none, in one transaction with its report and its row of the
 * trail. A file that is refused whole ends as `failed`; its original stays. May be called again after a crash.
 * `held` is the original where the caller has it still.
 */
export async function readUpload(deps: Deps, uploadId: string, held?: Buffer): Promise<UploadOutcome> {
  const original = held ?? (await deps.db.select({ original: elementUploads.original }).from(elementUploads).where(eq(elementUploads.id, uploadId)))[0]?.original
  if (!original) return { kind: 'elsewhere' }
  const reading = await readOriginal(original, deps.now.getTime())
  try {
    return await afterTheOthers(() => whenFree(() => deps.db.transaction(async (tx) => {
      const inner = { ...deps, db: tx }
      if (!await takeTurn(tx)) return null
      const [mine] = await tx.select({ id: elementUploads.id }).from(elementUploads)
        .where(and(eq(elementUploads.id, uploadId), inArray(elementUploads.state, unread))).for('update', { skipLocked: true })
      if (!mine) return { kind: 'elsewhere' }
      if (reading.kind === 'refused') return refuseWhole(inner, uploadId, reading)
      const stored = await storeSets(inner, uploadId, reading.sets, (share) => { progress.set(uploadId, Math.round(share * original.length)) })
      await finish(inner, uploadId, {
        state: 'finished',
        format: reading.format,
        accepted: stored.accepted,
        alreadyHeld: stored.alreadyHeld,
        refused: reading.refusals.length,
        refusals: reading.refusals.map(storableNote),
        warnings: [...reading.warnings.map(storableNote), ...stored.warnings].sort((a, b) => a.line - b.line),
      })
      return { kind: 'finished' }
    })))
  }
  finally {
    progress.delete(uploadId)
  }
}

async function refuseWhole(deps: Deps, uploadId: string, { detail, errors }: Extract<ElementReading, { kind: 'refused' }>): Promise<UploadOutcome> {
  await finish(deps, uploadId, { state: 'failed', refused: errors.length, refusals: errors.map(storableNote), detail: storableText(detail) })
  return { kind: 'refused', detail, errors }
}

async function finish(deps: Deps, uploadId: string, values: Partial<typeof elementUploads.$inferInsert>): Promise<void> {
  const [row] = await deps.db.update(elementUploads).set(values).where(eq(elementUploads.id, uploadId)).returning(briefColumns)
  const { sha256, totalBytes, fileName, source, state, format, accepted, alreadyHeld, refused } = row!
  await recordAudit(deps, { action: 'element-sets.upload', entityKind: 'element-upload', entityId: uploadId, after: { state, source, fileName, format, totalBytes, sha256, accepted, alreadyHeld, refused } })
}

/** Marks an upload whose storing broke off: nothing of it was kept but its original. */
export async function markBroken(db: Db, uploadId: string): Promise<void> {
  await db.update(elementUploads).set({ state: 'failed', detail: 'The server could not store this file; nothing of it was kept. Upload it again.' })
    .where(and(eq(elementUploads.id, uploadId), inArray(elementUploads.state, unread)))
}
