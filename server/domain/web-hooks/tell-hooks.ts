import { and, arrayContains, eq, isNull } from 'drizzle-orm'
import type { WebHookEvent } from '#shared/web-hook-events'
import { webHooks } from '~~/server/database/schema'
import type { Deps } from '../context'
import { queueDelivery } from './queue-delivery'

/**
 * Tells every web hook that wants to know. Call it inside the transaction that makes the event: a delivery exists
 * exactly when what it tells has happened. The body is thin: what it is about and where to read it.
 */
export async function tellHooks({ db, now }: Pick<Deps, 'db' | 'now'>, event: WebHookEvent, data: Record<string, unknown>): Promise<void> {
  const hooks = await db.select({ id: webHooks.id }).from(webHooks).where(and(eq(webHooks.enabled, true), isNull(webHooks.retiredAt), arrayContains(webHooks.events, [event]))).orderBy(webHooks.id)
  for (const hook of hooks) await queueDelivery({ db, now }, { hookId: hook.id, event, data })
}
