import { createHash, timingSafeEqual } from 'node:crypto'
import { and, eq, isNull } from 'drizzle-orm'
import type { Db } from '~~/server/database/client'
import { clockMs } from '~~/server/database/client'
import { apiKeys, stations } from '~~/server/database/schema'
import type { KeyActor } from '../context'

/** nb_ + 8 characters for the look-up + 32 characters (190 bits) that stay secret. */
export const keyForm = /^nb_[A-Za-z0-9]{8}[A-Za-z0-9]{32}$/
export const keyPrefixLength = 11

/**
 * The key behind a bearer text, looked up by prefix and compared in constant time, and the database's clock, which a key's
 * request needs anyway: station controllers ask often, so one question asks both. Null when unknown, revoked, or of a retired station.
 */
export async function findKey({ db }: { db: Db }, bearer: string): Promise<{ actor: KeyActor, now: Date } | null> {
  if (!keyForm.test(bearer)) return null
  const [found] = await db.select({ key: apiKeys, ms: clockMs() }).from(apiKeys).leftJoin(stations, eq(stations.id, apiKeys.stationId))
    .where(and(eq(apiKeys.prefix, bearer.slice(0, keyPrefixLength)), isNull(apiKeys.revokedAt), isNull(stations.retiredAt)))
  if (!found) return null
  const row = found.key
  const given = createHash('sha256').update(bearer).digest()
  if (!timingSafeEqual(given, Buffer.from(row.keyHash, 'hex'))) return null
  const now = new Date(Number(found.ms))
  if (!row.lastUsedAt || now.getTime() - row.lastUsedAt.getTime() > 60_000) await db.update(apiKeys).set({ lastUsedAt: now }).where(eq(apiKeys.id, row.id))
  return { actor: { kind: 'key', id: row.id, name: row.name, scope: row.scope, stationId: row.stationId }, now }
}
