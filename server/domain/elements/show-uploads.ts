import { desc, eq, inArray, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { UploadOut } from '#shared/schemas/elements'
import type { Db } from '~~/server/database/client'
import { elementSets, elementUploads, spacecraft } from '~~/server/database/schema'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'
import { DomainError } from '../errors'
import { briefColumns, readBytesOf, readOriginal } from './read-upload'
import { contentSha256 } from './store-sets'

type Brief = Pick<typeof elementUploads.$inferSelect, keyof typeof briefColumns>

function briefOut(row: Brief) {
  const isOver = row.state !== 'receiving' && row.state !== 'reading'
  return {
    id: row.id, state: row.state, format: row.format, fileName: row.fileName, by: row.by, at: row.createdAt.toISOString(),
    readBytes: isOver ? row.totalBytes : readBytesOf(row.id), totalBytes: row.totalBytes,
    accepted: row.accepted, alreadyHeld: row.alreadyHeld, refused: row.refused,
  }
}

/** Uploads, newest first, without their reports. */
export async function listUploads({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string }) {
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await db.select(briefColumns).from(elementUploads)
    .where(after ? sql`(${elementUploads.createdAt}, ${elementUploads.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined)
    .orderBy(desc(elementUploads.createdAt), desc(elementUploads.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.createdAt.toISOString(), row.id])
  return { items: page.rows.map(briefOut), nextCursor: page.nextCursor }
}

/** One upload and its report. */
export async function getUpload({ db }: Pick<Deps, 'db'>, id: string): Promise<UploadOut> {
  const [row] = await db.select({ ...briefColumns, refusals: elementUploads.refusals, warnings: elementUploads.warnings }).from(elementUploads).where(eq(elementUploads.id, id))
  if (!row) throw new DomainError('not-found', 'There is no upload under this address.')
  return { ...briefOut(row), refusals: row.refusals, warnings: row.warnings, sets: row.state === 'finished' ? await setsOf(db, row) : [] }
}

const setColumns = {
  id: elementSets.id, line: elementSets.lineNumber, name: elementSets.name, catalogueNumber: elementSets.catalogueNumber, epoch: elementSets.epoch,
  spacecraftId: elementSets.spacecraftId, spacecraftName: spacecraft.name, state: elementSets.state, key: elementSets.contentSha256,
}
const selectSets = (db: Db) => db.select(setColumns).from(elementSets).leftJoin(spacecraft, eq(spacecraft.id, elementSets.spacecraftId)).$dynamic()
type SetRow = Awaited<ReturnType<typeof selectSets>>[number]

/** The sets that an upload brought and those that it brought again, by line. */
async function setsOf(db: Db, row: Brief): Promise<UploadOut['sets']> {
  const rows = row.alreadyHeld === 0 ? await selectSets(db).where(eq(elementSets.uploadId, row.id)) : await setsAgain(db, row)
  return rows.sort((a, b) => a.line - b.line).map(({ key: _, epoch, ...set }) => ({ ...set, epoch: epoch.toISOString() }))
}

/** A set that was held belongs to the upload that brought it first; that this one holds it too is told by its original. */
async function setsAgain(db: Db, { id, createdAt }: Brief): Promise<SetRow[]> {
  const [upload] = await db.select({ original: elementUploads.original }).from(elementUploads).where(eq(elementUploads.id, id))
  const reading = await readOriginal(upload!.original, createdAt.getTime())
  if (reading.kind === 'refused') return []
  const lines = new Map(reading.sets.map(set => [contentSha256(set), set.line]))
  const keys = [...lines.keys()]
  const rows: SetRow[] = []
  for (let start = 0; start < keys.length; start += 10_000) rows.push(...await selectSets(db).where(inArray(elementSets.contentSha256, keys.slice(start, start + 10_000))))
  return rows.map(set => ({ ...set, line: lines.get(set.key) ?? set.line }))
}
