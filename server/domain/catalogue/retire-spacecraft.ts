import { and, eq, isNull } from 'drizzle-orm'
import { links, spacecraft } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { requireFound } from './require-row'

/** Retires a spacecraft with its links and has its coming passes taken back. Retiring twice changes nothing. */
export async function retireSpacecraft(deps: Deps, id: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(spacecraft).where(eq(spacecraft.id, id)).for('update')
    if (requireFound(row, 'spacecraft').retiredAt) return
    await tx.update(spacecraft).set({ retiredAt: deps.now }).where(eq(spacecraft.id, id))
    const retiredLinks = await tx.update(links).set({ retiredAt: deps.now }).where(and(eq(links.spacecraftId, id), isNull(links.retiredAt))).returning({ id: links.id })
    const pairs = await requestRefresh(inner, { spacecraftIds: [id], reason: `${row!.name} retired`, includeRetired: true })
    await recordAudit(inner, { action: 'spacecraft.retire', entityKind: 'spacecraft', entityId: id, before: { retiredAt: null }, after: { retiredAt: deps.now.toISOString(), retiredLinkIds: retiredLinks.map(link => link.id), stationsRecomputed: pairs } })
  })
}
