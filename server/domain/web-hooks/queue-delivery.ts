import type { testEvent, WebHookEvent } from '#shared/web-hook-events'
import { webHookDeliveries } from '~~/server/database/schema'
import { enqueue } from '~~/server/jobs/queue'
import type { Deps } from '../context'

export type DeliveryRow = typeof webHookDeliveries.$inferSelect

/** Writes one message down, byte for byte as every try sends it, and asks for its delivery. */
export async function queueDelivery({ db, now }: Pick<Deps, 'db' | 'now'>, message: { hookId: string, event: WebHookEvent | typeof testEvent, data: Record<string, unknown> }): Promise<DeliveryRow> {
  const body = JSON.stringify({ type: message.event, timestamp: now.toISOString(), data: message.data })
  const [row] = await db.insert(webHookDeliveries).values({ hookId: message.hookId, event: message.event, body, createdAt: now }).returning()
  await enqueue(db, 'web-hook', { deliveryId: row!.id })
  return row!
}
