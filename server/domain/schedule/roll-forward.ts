import { lt, or } from 'drizzle-orm'
import { idempotencyKeys, oneTimeLinks, rateLimits, receivedMails, sessions } from '~~/server/database/schema'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import type { Slot } from './slot'
import { claimSlot, finishSlot } from './slot'

const hourMs = 3600_000
const dayMs = 24 * hourMs

/** Once an hour the horizon rolls on by asking for every prediction, and what nobody needs any more is swept out. */
export async function rollForward(given: Deps): Promise<void> {
  const slot: Slot = { kind: 'roll-forward', entity: 'all', instant: new Date(Math.floor(given.now.getTime() / hourMs) * hourMs) }
  await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    if (!await claimSlot(deps, slot)) return
    const pairs = await requestRefresh(deps, { reason: 'The horizon rolls on.' })
    await sweep(deps)
    await finishSlot(deps, slot, `Asked for ${pairs === 1 ? '1 prediction' : `${pairs} predictions`}.`)
  })
}

async function sweep({ db, now }: Deps): Promise<void> {
  const before = (ms: number) => new Date(now.getTime() - ms)
  await db.delete(idempotencyKeys).where(lt(idempotencyKeys.createdAt, before(dayMs)))
  await db.delete(sessions).where(or(lt(sessions.expiresAt, before(30 * dayMs)), lt(sessions.endedAt, before(30 * dayMs))))
  await db.delete(oneTimeLinks).where(lt(oneTimeLinks.expiresAt, before(30 * dayMs)))
  await db.delete(rateLimits).where(lt(rateLimits.expire, now))
  await db.delete(receivedMails).where(lt(receivedMails.receivedAt, before(30 * dayMs)))
}
