import { desc, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { mailOut } from '#shared/schemas/alerts'
import { mails } from '~~/server/database/schema'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'

export type MailRow = typeof mails.$inferSelect

/** Without the text: an invitation's holds a one-time address. */
export function mailToOut({ id, kind, toName, toAddress, subject, state, attempts, lastError, createdAt, sentAt }: MailRow): z.infer<typeof mailOut> {
  return { id, kind, to: `${toName} <${toAddress}>`, subject, state, attempts, lastError, createdAt: createdAt.toISOString(), sentAt: sentAt?.toISOString() ?? null }
}

/** Mail sent, waiting and failed, newest first. */
export async function listMails({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string }) {
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await db.select().from(mails)
    .where(after ? sql`(${mails.createdAt}, ${mails.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined)
    .orderBy(desc(mails.createdAt), desc(mails.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.createdAt.toISOString(), row.id])
  return { items: page.rows.map(mailToOut), nextCursor: page.nextCursor }
}
