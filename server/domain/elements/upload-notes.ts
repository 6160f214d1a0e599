import { and, asc, eq, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { NoteOut, uploadNotesQuery } from '#shared/schemas/elements'
import { elementUploadNotes } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'
import { findUpload } from './show-uploads'

const key = z.tuple([z.int32(), z.int()])

/** Refusals or warnings of an upload, by line, page by page. */
export async function listUploadNotes({ db }: Pick<Deps, 'db'>, uploadId: string, query: z.output<typeof uploadNotesQuery>): Promise<{ items: NoteOut[], nextCursor: string | null }> {
  await findUpload(db, uploadId)
  const after = readCursor(query.cursor, key)
  const rows = await db.select().from(elementUploadNotes)
    .where(and(
      eq(elementUploadNotes.uploadId, uploadId),
      eq(elementUploadNotes.kind, query.kind),
      after ? sql`(${elementUploadNotes.line}, ${elementUploadNotes.id}) > (${after[0]}::integer, ${after[1]}::bigint)` : undefined,
    ))
    .orderBy(asc(elementUploadNotes.line), asc(elementUploadNotes.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.line, row.id])
  return { items: page.rows.map(({ line, name, code, message }) => ({ line, ...(name === null ? {} : { name }), code, message })), nextCursor: page.nextCursor }
}
