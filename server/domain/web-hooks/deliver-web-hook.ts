import { eq, sql } from 'drizzle-orm'
import { Webhook } from 'standardwebhooks'
import { webHookDeliveries, webHooks } from '~~/server/database/schema'
import type { OutwardOptions } from '~~/server/outward/call-outward'
import { callOutward } from '~~/server/outward/call-outward'
import { AddressRefused } from '~~/server/outward/outward-address'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { systemActor } from '../context'

export interface DeliverOptions {
  outward: OutwardOptions
  /** No further try follows: what fails now has failed. */
  lastTry?: boolean
}

/** Of an answer that refuses, as much is kept. */
const keptChars = 500
/** Standard Webhooks: the receiver wants to be told nothing any more. */
const goneStatus = 410

/**
 * One try to deliver one message as Standard Webhooks 1.0.0 has it: headers webhook-id, webhook-timestamp and
 * webhook-signature (HMAC-SHA256 over id, time of this try and body). Any 2xx is a delivery; 410 switches the hook off.
 * @throws what went wrong, when another try makes sense
 */
export async function deliverWebHook({ db, now }: Pick<Deps, 'db' | 'now'>, deliveryId: string, { outward, lastTry = false }: DeliverOptions): Promise<void> {
  const [found] = await db.select({ delivery: webHookDeliveries, hook: webHooks }).from(webHookDeliveries).innerJoin(webHooks, eq(webHooks.id, webHookDeliveries.hookId)).where(eq(webHookDeliveries.id, deliveryId))
  if (!found || found.delivery.state !== 'queued') return
  const { delivery, hook } = found
  const end = (change: Partial<typeof webHookDeliveries.$inferSelect>, tried = true) => db.update(webHookDeliveries)
    .set({ ...(tried ? { triedAt: now } : {}), attempts: tried ? sql`${webHookDeliveries.attempts} + 1` : delivery.attempts, ...change } as object).where(eq(webHookDeliveries.id, deliveryId))
  if (!hook.enabled || hook.retiredAt) {
    await end({ state: 'failed', lastStatus: null, lastError: 'Not sent: the hook has been switched off.' }, false)
    return
  }
  const result = await send(delivery, hook, now, outward)
  if (result.error === null) {
    await end({ state: 'delivered', lastStatus: result.status, lastError: null })
    return
  }
  const failed = lastTry || result.forGood
  await end({ lastStatus: result.status, lastError: result.error, ...(failed ? { state: 'failed' as const } : {}) })
  if (result.status === goneStatus) await switchOff({ db, now }, hook)
  if (!failed) throw new Error(result.error)
}

interface Result { status: number | null, error: string | null, forGood: boolean }

async function send(delivery: { id: string, body: string }, hook: { url: string, secret: string }, now: Date, outward: OutwardOptions): Promise<Result> {
  try {
    // Signed in whole seconds, as they are sent.
    const signature = new Webhook(hook.secret).sign(delivery.id, now, delivery.body)
    const headers = { 'content-type': 'application/json', 'webhook-id': delivery.id, 'webhook-timestamp': String(Math.floor(now.getTime() / 1000)), 'webhook-signature': signature }
    const { status, text } = await callOutward({ url: hook.url, method: 'POST', headers, body: delivery.body }, outward)
    if (status >= 200 && status < 300) return { status, error: null, forGood: false }
    const why = status >= 300 && status < 400 ? 'Redirects are not followed: give the address that answers.' : text
    return { status, error: storable(`Answered ${status}. ${why}`), forGood: status === goneStatus }
  }
  catch (error) {
    return { status: null, error: storable(error instanceof Error ? error.message || error.name : String(error)), forGood: error instanceof AddressRefused }
  }
}

/** A receiver's words may hold what a database does not. */
const storable = (text: string) => text.replaceAll('\u0000', '').toWellFormed().trim().slice(0, keptChars)

async function switchOff({ db, now }: Pick<Deps, 'db' | 'now'>, hook: { id: string, name: string }): Promise<void> {
  await db.transaction(async (tx) => {
    await tx.update(webHooks).set({ enabled: false }).where(eq(webHooks.id, hook.id))
    await recordAudit({ db: tx, now, actor: systemActor }, { action: 'web-hook.change', entityKind: 'web-hook', entityId: hook.id, reason: `Its receiver answered ${goneStatus}: it wants no more messages.`, before: { enabled: true }, after: { enabled: false } })
  })
}
