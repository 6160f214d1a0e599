import { eq } from 'drizzle-orm'
import { links } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { requireFound } from './require-row'

/** Retires a link and has its coming tables taken back. Retiring twice changes nothing. */
export async function retireLink(deps: Deps, id: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(links).where(eq(links.id, id)).for('update')
    const present = requireFound(row, 'link')
    if (present.retiredAt) return
    await tx.update(links).set({ retiredAt: deps.now }).where(eq(links.id, id))
    const pairs = await requestRefresh(inner, { spacecraftIds: [present.spacecraftId], reason: `link ${present.name} retired` })
    await recordAudit(inner, { action: 'link.retire', entityKind: 'link', entityId: id, before: { retiredAt: null }, after: { retiredAt: deps.now.toISOString(), stationsRecomputed: pairs } })
  })
}
