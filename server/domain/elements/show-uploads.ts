import { and, asc, desc, eq, inArray, sql } from 'drizzle-orm'
import { unionAll } from 'drizzle-orm/pg-core'
import { z } from 'zod'
import type { UploadBrief, UploadOut, uploadsQuery } from '#shared/schemas/elements'
import type { Db } from '~~/server/database/client'
import { elementSets, elementUploadHeld, elementUploadNotes, elementUploads, spacecraft } from '~~/server/database/schema'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'
import { DomainError } from '../errors'
import type { UploadRow } from './upload-columns'
import { inHand, isInHand } from './upload-columns'

/** So many lines of each kind stand in an upload's own answer; further ones are paged. */
const linesShown = 1000

export function briefOut(row: UploadRow): UploadBrief {
  const { id, state, format, fileName, by, source, totalBytes, accepted, alreadyHeld, refused, detail } = row
  return {
    id, state, format, fileName, by, source, at: row.createdAt.toISOString(), finishedAt: row.finishedAt?.toISOString() ?? null,
    readBytes: isInHand(row) ? row.readBytes : totalBytes, totalBytes, accepted, alreadyHeld, refused, detail,
    cancelling: isInHand(row) && row.cancelRequestedAt !== null,
  }
}

/** Uploads, newest first, without their reports. */
export async function listUploads({ db }: Pick<Deps, 'db'>, query: Partial<z.output<typeof uploadsQuery>> & { limit: number }) {
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await db.select().from(elementUploads)
    .where(and(
      query.inHand === 'true' ? inArray(elementUploads.state, inHand) : undefined,
      query.source ? eq(elementUploads.source, query.source) : undefined,
      after ? sql`(${elementUploads.createdAt}, ${elementUploads.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined,
    ))
    .orderBy(desc(elementUploads.createdAt), desc(elementUploads.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.createdAt.toISOString(), row.id])
  return { items: page.rows.map(briefOut), nextCursor: page.nextCursor }
}

export async function findUpload(db: Pick<Db, 'select'>, id: string): Promise<UploadRow> {
  const [row] = await db.select().from(elementUploads).where(eq(elementUploads.id, id))
  if (!row) throw new DomainError('not-found', 'There is no upload under this address.')
  return row
}

/** One upload and its report: the first thousand lines of each kind, the counts of all. */
export async function getUpload({ db }: Pick<Deps, 'db'>, id: string): Promise<UploadOut> {
  const row = await findUpload(db, id)
  const [refusals, warnings] = [await firstNotes(db, id, 'refusal'), await firstNotes(db, id, 'warning')]
  const warned = warnings.length < linesShown ? warnings.length : await db.$count(elementUploadNotes, and(eq(elementUploadNotes.uploadId, id), eq(elementUploadNotes.kind, 'warning')))
  return { ...briefOut(row), warned, refusals, warnings, sets: row.state === 'finished' ? await firstSets(db, id) : [] }
}

async function firstNotes(db: Pick<Db, 'select'>, uploadId: string, kind: 'refusal' | 'warning') {
  const { line, name, code, message } = elementUploadNotes
  const rows = await db.select({ line, name, code, message }).from(elementUploadNotes)
    .where(and(eq(elementUploadNotes.uploadId, uploadId), eq(elementUploadNotes.kind, kind))).orderBy(asc(line), asc(elementUploadNotes.id)).limit(linesShown)
  return rows.map(({ name, ...note }) => name === null ? note : { ...note, name })
}

/** The sets that an upload brought and those that it brought again, by line. */
async function firstSets(db: Db, uploadId: string): Promise<UploadOut['sets']> {
  const { id, name, catalogueNumber, epoch, spacecraftId, state } = elementSets
  const rest = { id, name, catalogueNumber, epoch, spacecraftId, spacecraftName: spacecraft.name, state }
  const brought = db.select({ line: elementSets.lineNumber, ...rest }).from(elementSets).leftJoin(spacecraft, eq(spacecraft.id, spacecraftId)).where(eq(elementSets.uploadId, uploadId))
    .orderBy(elementSets.lineNumber).limit(linesShown)
  const again = db.select({ line: elementUploadHeld.line, ...rest }).from(elementUploadHeld).innerJoin(elementSets, eq(id, elementUploadHeld.elementSetId)).leftJoin(spacecraft, eq(spacecraft.id, spacecraftId))
    .where(eq(elementUploadHeld.uploadId, uploadId)).orderBy(elementUploadHeld.line).limit(linesShown)
  const rows = await unionAll(brought, again).orderBy(sql`1`).limit(linesShown)
  return rows.map(({ epoch, ...set }) => ({ ...set, epoch: epoch.toISOString() }))
}
