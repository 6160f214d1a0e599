import { and, eq, isNotNull, ne } from 'drizzle-orm'
import { formatUtc } from '#shared/utils/format'
import type { ElementSetOut } from '#shared/schemas/elements'
import { elementSets, spacecraft } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { requireLive } from '../catalogue/require-row'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { getElementSet } from './read-element-sets'
import { findSet, lockSet, requirePropagation, requireSpacecraft, unscheduled } from './use-element-set'

const FURTHEST_MS = 30 * 86_400_000

/** A person's decision now that a set goes into use at an instant; until then it waits, and another decision on it or its spacecraft may come first. */
export async function scheduleUse(deps: Deps, { id, at }: { id: string, at: string }): Promise<ElementSetOut> {
  const person = deps.actor
  if (person.kind !== 'person') throw new DomainError('not-allowed', 'Element sets are put into use by people.')
  const useAt = new Date(at)
  const aheadMs = useAt.getTime() - deps.now.getTime()
  if (aheadMs <= 0 || aheadMs > FURTHEST_MS) throw new DomainError('not-valid', 'Give an instant between now and thirty days from now.', [{ path: 'at', message: 'Give an instant between now and thirty days from now.' }])
  await deps.db.transaction(async (tx) => {
    const spacecraftId = requireSpacecraft(await findSet(tx, id))
    // In the same order as putting into use does: the spacecraft, then the set.
    const [row] = await tx.select().from(spacecraft).where(eq(spacecraft.id, spacecraftId)).for('update')
    const craft = requireLive(row, 'spacecraft')
    const set = await lockSet(tx, id)
    if (set.state !== 'waiting' && set.state !== 'past') throw new DomainError('conflict', set.state === 'in-use' ? 'This set is in use already.' : 'This set was refused; upload it anew or choose another.')
    requirePropagation(set.elements, useAt)
    const [other] = await tx.select({ epoch: elementSets.epoch }).from(elementSets).where(and(eq(elementSets.spacecraftId, spacecraftId), eq(elementSets.useAt, useAt), ne(elementSets.id, id)))
    if (other) throw new DomainError('conflict', `Another set of ${craft.name}, of ${formatUtc(other.epoch.getTime(), 'minute')}, goes into use at this instant: take that back first, or choose another instant.`)
    await tx.update(elementSets).set({ useAt, useScheduledById: person.id, useScheduledBy: person.name }).where(eq(elementSets.id, id))
    await recordAudit({ ...deps, db: tx }, {
      action: 'element-set.schedule-use', entityKind: 'element-set', entityId: id,
      before: { useAt: set.useAt?.toISOString() ?? null }, after: { useAt: useAt.toISOString(), spacecraftId, inUseSetId: craft.inUseSetId },
    })
  })
  return getElementSet(deps, id)
}

/** Takes back what was scheduled; the set waits, or stays past, as before. */
export async function cancelUse(deps: Deps, { id }: { id: string }): Promise<ElementSetOut> {
  await deps.db.transaction(async (tx) => {
    await findSet(tx, id)
    const [set] = await tx.select({ useAt: elementSets.useAt, by: elementSets.useScheduledBy }).from(elementSets).where(and(eq(elementSets.id, id), isNotNull(elementSets.useAt))).for('update')
    if (!set) throw new DomainError('conflict', 'Nothing is scheduled with this set: it was taken back already, or has been decided on.')
    await tx.update(elementSets).set(unscheduled).where(eq(elementSets.id, id))
    await recordAudit({ ...deps, db: tx }, { action: 'element-set.cancel-use', entityKind: 'element-set', entityId: id, before: { useAt: set.useAt!.toISOString(), useScheduledBy: set.by }, after: { useAt: null } })
  })
  return getElementSet(deps, id)
}
