import { desc, sql } from 'drizzle-orm'
import { z } from 'zod'
import { may } from '#shared/permissions'
import type { receivedMailOut } from '#shared/schemas/alerts'
import { receivedMails } from '~~/server/database/schema'
import type { Actor, Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'
import { DomainError } from '../errors'
import { mailIsLocal } from './mail-is-local'

/** What the product's own mail server received, newest first. One-time addresses are for those who may invite: with one, anybody could become the person invited. */
export async function listReceivedMails({ db, actor }: Pick<Deps, 'db' | 'actor'>, query: { limit: number, cursor?: string }) {
  if (!mailIsLocal()) throw new DomainError('not-found', 'Mail goes to a mail server of its own; nothing of it is kept here.')
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await db.select().from(receivedMails)
    .where(after ? sql`(${receivedMails.receivedAt}, ${receivedMails.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined)
    .orderBy(desc(receivedMails.receivedAt), desc(receivedMails.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.receivedAt.toISOString(), row.id])
  const shown = seesTokens(actor) ? (text: string) => text : withoutTokens
  return { items: page.rows.map(row => toOut(row, shown)), nextCursor: page.nextCursor }
}

function toOut(row: typeof receivedMails.$inferSelect, shown: (text: string) => string): z.infer<typeof receivedMailOut> {
  const { id, fromAddress, toAddresses, subject, text, html, receivedAt } = row
  return { id, from: fromAddress, to: toAddresses, subject: shown(subject), text: shown(text), html: html === null ? null : shown(html), receivedAt: receivedAt.toISOString() }
}

const seesTokens = (actor: Actor) => actor.kind === 'person' && may(actor.roles, 'people:manage')
const withoutTokens = (text: string) => text.replace(/#token=[\w-]+/g, '#token=shown-to-administrators-only')
