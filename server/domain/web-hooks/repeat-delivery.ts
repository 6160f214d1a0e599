import { eq } from 'drizzle-orm'
import type { DeliveryOut } from '#shared/schemas/web-hooks'
import { webHookDeliveries } from '~~/server/database/schema'
import { enqueue } from '~~/server/jobs/queue'
import { recordAudit } from '../audit'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { deliveryToOut } from './list-deliveries'
import { lockWebHook } from './lock-web-hook'

/** Sends the same message once more, under its first id, so that its receiver knows it again. */
export async function repeatDelivery(deps: Deps, id: string): Promise<DeliveryOut> {
  return deps.db.transaction(async (tx) => {
    const [found] = await tx.select().from(webHookDeliveries).where(eq(webHookDeliveries.id, id)).for('update')
    const delivery = requireFound(found, 'delivery')
    const hook = await lockWebHook({ db: tx }, delivery.hookId)
    if (!hook.enabled) throw new DomainError('conflict', 'This hook is switched off: switch it on first.')
    if (delivery.state === 'queued') throw new DomainError('conflict', 'This message waits for its next try already.')
    const [queued] = await tx.update(webHookDeliveries).set({ state: 'queued' }).where(eq(webHookDeliveries.id, id)).returning()
    await enqueue(tx, 'web-hook', { deliveryId: id })
    await recordAudit({ ...deps, db: tx }, { action: 'web-hook.repeat', entityKind: 'web-hook', entityId: hook.id, before: { delivery: id, state: delivery.state }, after: { delivery: id, state: 'queued' } })
    return deliveryToOut(queued!)
  })
}
