import { eq } from 'drizzle-orm'
import type { ElementSetOut } from '#shared/schemas/elements'
import { elementSets } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { getElementSet } from './read-element-sets'
import { unscheduled } from './use-element-set'

const told = {
  'in-use': 'This set is in use: put another into use instead.',
  'past': 'This set was in use once and stays on record as past.',
  'refused': 'This set has been refused already.',
}

/** Refuses a waiting set, with a reason if there is one to give; it stays on record. What was scheduled with it ends. */
export async function refuseElementSet(deps: Deps, { id, reason = null }: { id: string, reason?: string | null }): Promise<ElementSetOut> {
  await deps.db.transaction(async (tx) => {
    const [set] = await tx.select({ state: elementSets.state, spacecraftId: elementSets.spacecraftId, useAt: elementSets.useAt }).from(elementSets).where(eq(elementSets.id, id)).for('update')
    if (!set) throw new DomainError('not-found', 'There is no element set under this address.')
    if (set.state !== 'waiting') throw new DomainError('conflict', told[set.state])
    await tx.update(elementSets).set({ state: 'refused', decidedAt: deps.now, decidedBy: deps.actor.name, reason, ...unscheduled }).where(eq(elementSets.id, id))
    await recordAudit({ ...deps, db: tx }, { action: 'element-set.refuse', entityKind: 'element-set', entityId: id, reason, before: { state: 'waiting', useAt: set.useAt?.toISOString() ?? null }, after: { state: 'refused', spacecraftId: set.spacecraftId } })
  })
  return getElementSet(deps, id)
}
