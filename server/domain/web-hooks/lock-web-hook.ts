import { and, eq, isNull } from 'drizzle-orm'
import { webHooks } from '~~/server/database/schema'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'

/** The hook, locked for the transaction that decides on it; a retired one is not there. */
export async function lockWebHook({ db }: Pick<Deps, 'db'>, id: string): Promise<typeof webHooks.$inferSelect> {
  const [row] = await db.select().from(webHooks).where(and(eq(webHooks.id, id), isNull(webHooks.retiredAt))).for('update')
  return requireFound(row, 'web hook')
}
