import { eq } from 'drizzle-orm'
import { apiKeys } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'

/** The key stops working at once. Revoking twice changes nothing. */
export async function revokeKey(deps: Deps, id: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const [row] = await tx.select().from(apiKeys).where(eq(apiKeys.id, id)).for('update')
    const key = requireFound(row, 'key')
    if (key.revokedAt) return
    await tx.update(apiKeys).set({ revokedAt: deps.now }).where(eq(apiKeys.id, id))
    await recordAudit({ ...deps, db: tx }, { action: 'key.revoke', entityKind: 'key', entityId: id, before: { revokedAt: null }, after: { name: key.name, prefix: key.prefix, revokedAt: deps.now.toISOString() } })
  })
}
