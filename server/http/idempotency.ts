import { createHash } from 'node:crypto'
import { and, eq, isNull, lt } from 'drizzle-orm'
import type { H3Event } from 'h3'
import { getRequestHeader, setResponseStatus } from 'h3'
import { canonicalJson } from '#shared/formats/canonical-json'
import type { Actor } from '~~/server/domain/context'
import { actorId } from '~~/server/domain/context'
import { DomainError } from '~~/server/domain/errors'
import type { Db } from '~~/server/database/client'
import { idempotencyKeys } from '~~/server/database/schema'

/** No request works for this long. */
const cutOffMs = 3 * 60_000

interface Once { db: Db, now: Date, actor: Actor | null, route: string, body: unknown, status: number }

/**
 * The same Idempotency-Key with the same body gives the first answer again; with another body it is a conflict,
 * and so it is while the first is still at work. A first that was cut off, by a server that died, is made again.
 */
export async function answerOnce<T>(event: H3Event, once: Once, act: () => Promise<T>): Promise<T> {
  const key = getRequestHeader(event, 'idempotency-key')!
  if (key.length < 1 || key.length > 200) throw new DomainError('not-valid', 'Idempotency-Key: 1 to 200 characters.', [{ path: 'Idempotency-Key', message: '1 to 200 characters.' }])
  const { db, route } = once
  const actor = once.actor ? `${once.actor.kind}:${actorId(once.actor)}` : 'nobody'
  const bodySha256 = createHash('sha256').update(canonicalJson(once.body ?? null)).digest('hex')
  const mine = and(eq(idempotencyKeys.actor, actor), eq(idempotencyKeys.key, key))
  const cutOff = and(isNull(idempotencyKeys.status), eq(idempotencyKeys.route, route), eq(idempotencyKeys.bodySha256, bodySha256), lt(idempotencyKeys.createdAt, new Date(once.now.getTime() - cutOffMs)))
  const claimed = await db.insert(idempotencyKeys).values({ actor, key, route, bodySha256, createdAt: once.now })
    .onConflictDoUpdate({ target: [idempotencyKeys.actor, idempotencyKeys.key], set: { createdAt: once.now }, setWhere: cutOff }).returning({ key: idempotencyKeys.key })
  if (claimed.length === 0) {
    const [first] = await db.select().from(idempotencyKeys).where(mine)
    if (!first || first.route !== route || first.bodySha256 !== bodySha256) throw new DomainError('conflict', 'This Idempotency-Key was used for another request: take a new one.')
    if (first.status === null) throw new DomainError('conflict', 'The first request with this Idempotency-Key is still at work: try again shortly.')
    setResponseStatus(event, first.status)
    return first.answer as T
  }
  try {
    const answer = await act()
    await db.update(idempotencyKeys).set({ status: once.status, answer }).where(mine)
    return answer
  }
  catch (error) {
    await db.delete(idempotencyKeys).where(mine)
    throw error
  }
}
