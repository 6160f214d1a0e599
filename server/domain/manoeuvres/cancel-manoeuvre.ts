import { eq } from 'drizzle-orm'
import type { ManoeuvreOut } from '#shared/schemas/manoeuvres'
import { manoeuvres } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { requestRefresh } from '../prediction/request-refresh'
import { getManoeuvre } from './read-manoeuvres'

/** A manoeuvre that did not take place, or was entered wrongly: it stays on record and counts no longer. */
export async function cancelManoeuvre(deps: Deps, { id }: { id: string }): Promise<ManoeuvreOut> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(manoeuvres).where(eq(manoeuvres.id, id)).for('update')
    const found = requireFound(row, 'manoeuvre')
    if (found.cancelledAt) throw new DomainError('conflict', `This manoeuvre was cancelled already, by ${found.cancelledBy}.`)
    await tx.update(manoeuvres).set({ cancelledAt: deps.now, cancelledBy: deps.actor.name }).where(eq(manoeuvres.id, id))
    await recordAudit(inner, { action: 'manoeuvre.cancel', entityKind: 'manoeuvre', entityId: id, before: { cancelledAt: null }, after: { cancelledAt: deps.now.toISOString(), spacecraftId: found.spacecraftId } })
    await requestRefresh(inner, { spacecraftIds: [found.spacecraftId], reason: `A manoeuvre at ${found.startsAt.toISOString().slice(0, 16)}Z was cancelled` })
  })
  return getManoeuvre(deps, id)
}
