import { eq } from 'drizzle-orm'
import { webHooks } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { lockWebHook } from './lock-web-hook'

/** The hook is told nothing any more and its secret is forgotten. */
export async function retireWebHook(deps: Deps, id: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const { name } = await lockWebHook({ db: tx }, id)
    await tx.update(webHooks).set({ enabled: false, retiredAt: deps.now, secret: '' }).where(eq(webHooks.id, id))
    await recordAudit({ ...deps, db: tx }, { action: 'web-hook.retire', entityKind: 'web-hook', entityId: id, before: { retiredAt: null }, after: { name, retiredAt: deps.now.toISOString() } })
  })
}
