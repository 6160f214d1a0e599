import { desc, eq, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { keyOut } from '#shared/schemas/people'
import { apiKeys, stations } from '~~/server/database/schema'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'

type KeyOut = z.infer<typeof keyOut>
const select = (db: Deps['db']) => db.select({ key: apiKeys, stationName: stations.name }).from(apiKeys).leftJoin(stations, eq(stations.id, apiKeys.stationId)).$dynamic()

function toOut({ key, stationName }: { key: typeof apiKeys.$inferSelect, stationName: string | null }): KeyOut {
  const { id, name, prefix, scope, stationId, createdAt, lastUsedAt, revokedAt } = key
  return { id, name, prefix, scope, stationId, stationName, createdAt: createdAt.toISOString(), lastUsedAt: lastUsedAt?.toISOString() ?? null, revokedAt: revokedAt?.toISOString() ?? null }
}

/** Keys, newest first, revoked ones too. */
export async function listKeys({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string }) {
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await select(db)
    .where(after ? sql`(${apiKeys.createdAt}, ${apiKeys.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined)
    .orderBy(desc(apiKeys.createdAt), desc(apiKeys.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ key }) => [key.createdAt.toISOString(), key.id])
  return { items: page.rows.map(toOut), nextCursor: page.nextCursor }
}

export async function getKey({ db }: Pick<Deps, 'db'>, id: string): Promise<KeyOut> {
  const [row] = await select(db).where(eq(apiKeys.id, id))
  return toOut(requireFound(row, 'key'))
}
