import { and, desc, eq, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { DeliveryOut } from '#shared/schemas/web-hooks'
import { webHookDeliveries } from '~~/server/database/schema'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'
import type { DeliveryRow } from './queue-delivery'
import { getWebHook } from './read-web-hooks'

export function deliveryToOut({ id, event, body, state, attempts, lastStatus, lastError, createdAt, triedAt }: DeliveryRow): DeliveryOut {
  return { id, event, body, state, attempts, lastStatus, lastError, createdAt: createdAt.toISOString(), triedAt: triedAt?.toISOString() ?? null }
}

/** What a hook was told or is to be told, newest first. */
export async function listDeliveries({ db }: Pick<Deps, 'db'>, query: { hookId: string, limit: number, cursor?: string }): Promise<{ items: DeliveryOut[], nextCursor: string | null }> {
  await getWebHook({ db }, query.hookId)
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await db.select().from(webHookDeliveries)
    .where(and(eq(webHookDeliveries.hookId, query.hookId), after ? sql`(${webHookDeliveries.createdAt}, ${webHookDeliveries.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined))
    .orderBy(desc(webHookDeliveries.createdAt), desc(webHookDeliveries.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.createdAt.toISOString(), row.id])
  return { items: page.rows.map(deliveryToOut), nextCursor: page.nextCursor }
}
