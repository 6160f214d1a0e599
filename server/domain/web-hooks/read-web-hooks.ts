import { and, desc, eq, isNull, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { WebHookOut } from '#shared/schemas/web-hooks'
import type { WebHookEvent } from '#shared/web-hook-events'
import type { Db } from '~~/server/database/client'
import { webHooks } from '~~/server/database/schema'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'

// The query builder leaves the table's name off a column where it reads one table only.
const ofHook = sql`FROM web_hook_deliveries d WHERE d.hook_id = web_hooks.id`
const countOf = (state: 'queued' | 'failed') => sql<number>`(SELECT count(*)::int ${ofHook} AND d.state = ${state})`

const select = (db: Db) => db.select({
  hook: webHooks, queued: countOf('queued'), failed: countOf('failed'),
  lastDeliveredAt: sql<string | null>`(SELECT max(d.tried_at) ${ofHook} AND d.state = 'delivered')`,
}).from(webHooks)
type Row = Awaited<ReturnType<typeof select>>[number]

/** Never with the secret. */
function toOut({ hook, queued, failed, lastDeliveredAt }: Row): WebHookOut {
  const { id, name, url, events, enabled, createdBy, createdAt } = hook
  return { id, name, url, events: events as WebHookEvent[], enabled, createdBy, createdAt: createdAt.toISOString(), queued, failed, lastDeliveredAt: lastDeliveredAt === null ? null : new Date(lastDeliveredAt).toISOString() }
}

/** Hooks that are not retired, newest first. */
export async function listWebHooks({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string }): Promise<{ items: WebHookOut[], nextCursor: string | null }> {
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await select(db)
    .where(and(isNull(webHooks.retiredAt), after ? sql`(${webHooks.createdAt}, ${webHooks.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined))
    .orderBy(desc(webHooks.createdAt), desc(webHooks.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ hook }) => [hook.createdAt.toISOString(), hook.id])
  return { items: page.rows.map(toOut), nextCursor: page.nextCursor }
}

export async function getWebHook({ db }: Pick<Deps, 'db'>, id: string): Promise<WebHookOut> {
  const [row] = await select(db).where(and(eq(webHooks.id, id), isNull(webHooks.retiredAt)))
  return toOut(requireFound(row, 'web hook'))
}
