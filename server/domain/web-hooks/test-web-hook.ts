import type { DeliveryOut } from '#shared/schemas/web-hooks'
import { testEvent } from '#shared/web-hook-events'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { deliveryToOut } from './list-deliveries'
import { lockWebHook } from './lock-web-hook'
import { queueDelivery } from './queue-delivery'

/** Sends a message that says only that it is a test, in the way of every other. */
export async function testWebHook(deps: Deps, id: string): Promise<DeliveryOut> {
  return deps.db.transaction(async (tx) => {
    const hook = await lockWebHook({ db: tx }, id)
    if (!hook.enabled) throw new DomainError('conflict', 'This hook is switched off: switch it on first.')
    return deliveryToOut(await queueDelivery({ db: tx, now: deps.now }, { hookId: id, event: testEvent, data: { hookId: id, hook: hook.name, askedBy: deps.actor.name } }))
  })
}
