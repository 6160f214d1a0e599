import { eq } from 'drizzle-orm'
import { createEphemeris } from '#shared/physics/orbit/ephemeris'
import { createPropagator } from '#shared/physics/orbit/propagator'
import type { MeanElements } from '#shared/physics/types'
import type { ElementSetOut } from '#shared/schemas/elements'
import type { Db } from '~~/server/database/client'
import { elementSets, spacecraft } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { requestRefresh } from '../prediction/request-refresh'
import { propagationErrorText } from './propagation-error-text'
import { getElementSet } from './read-element-sets'

export type SetRow = typeof elementSets.$inferSelect

/** What a set that is decided on no longer waits for. */
export const unscheduled = { useAt: null, useScheduledById: null, useScheduledBy: null }

export interface UseInput {
  id: string
  /** Goes to the trail: why, where it was not decided just now. */
  reason?: string
  /** What was in use when this was decided; another since is a conflict. Left out: whatever is in use now. */
  formerId?: string | null
}

/**
 * Puts a waiting set into use, or a past one again (roll-back): it is what predictions are made with from now on. The
 * set that was in use is past. Of two people who decide at once for one spacecraft, one wins; the other is told.
 */
export async function useElementSet(deps: Deps, { id, reason, formerId }: UseInput): Promise<ElementSetOut> {
  await deps.db.transaction(async (tx) => {
    const seen = await findSet(tx, id)
    const spacecraftId = requireSpacecraft(seen)
    const [before] = await tx.select({ inUseSetId: spacecraft.inUseSetId }).from(spacecraft).where(eq(spacecraft.id, spacecraftId))
    const [craft] = await tx.select().from(spacecraft).where(eq(spacecraft.id, spacecraftId)).for('update')
    if (!craft || craft.retiredAt) throw new DomainError('conflict', 'The spacecraft of this set has been retired; nothing is predicted for it.')
    if ((formerId === undefined ? before?.inUseSetId : formerId) !== craft.inUseSetId) throw new DomainError('conflict', `Someone else has just put another set of ${craft.name} into use: compare with that one and decide again.`)
    const set = await lockSet(tx, id)
    if (set.spacecraftId !== spacecraftId) throw new DomainError('conflict', 'This set has just been given to another spacecraft: reload and decide again.')
    if (set.state !== 'waiting' && set.state !== 'past') throw new DomainError('conflict', set.state === 'in-use' ? 'This set is in use already.' : 'This set was refused; upload it anew or choose another.')
    requirePropagation(set.elements, deps.now)

    const former = craft.inUseSetId
    if (former) await tx.update(elementSets).set({ state: 'past' }).where(eq(elementSets.id, former))
    await tx.update(elementSets).set({ state: 'in-use', decidedAt: deps.now, decidedBy: deps.actor.name, reason: null, ...unscheduled }).where(eq(elementSets.id, id))
    await tx.update(spacecraft).set({ inUseSetId: id }).where(eq(spacecraft.id, spacecraftId))
    const inner = { ...deps, db: tx }
    await recordAudit(inner, {
      action: set.state === 'past' ? 'element-set.roll-back' : 'element-set.use', entityKind: 'element-set', entityId: id, reason,
      before: { state: set.state, inUseSetId: former }, after: { state: 'in-use', inUseSetId: id, spacecraftId, epoch: set.epoch.toISOString() },
    })
    const epoch = `${set.epoch.toISOString().slice(0, 16)}Z`
    await requestRefresh(inner, { spacecraftIds: [spacecraftId], reason: set.state === 'past' ? `Rolled back to the elements of ${epoch}` : `Elements of ${epoch} put into use` })
  })
  return getElementSet(deps, id)
}

export async function findSet(db: Pick<Db, 'select'>, id: string): Promise<SetRow> {
  const [set] = await db.select().from(elementSets).where(eq(elementSets.id, id))
  if (!set) throw new DomainError('not-found', 'There is no element set under this address.')
  return set
}

export async function lockSet(tx: Db, id: string): Promise<SetRow> {
  const [set] = await tx.select().from(elementSets).where(eq(elementSets.id, id)).for('update')
  if (!set) throw new DomainError('not-found', 'There is no element set under this address.')
  return set
}

export function requireSpacecraft(set: SetRow): string {
  if (set.spacecraftId === null) throw new DomainError('conflict', 'This set belongs to no spacecraft: make a spacecraft from it, or give a spacecraft its catalogue number, then put it into use.')
  return set.spacecraftId
}

/** A set that fails at its epoch, or whose orbit has decayed by now, predicts nothing. */
export function requirePropagation(elements: MeanElements, now: Date): void {
  const result = createPropagator(elements)
  const refuse = (when: string, why: string) => new DomainError('not-valid', `The set cannot be put into use: SGP4 fails ${when} (${why}). Refuse it and take another.`)
  if (!result.ok) throw refuse('at its epoch', propagationErrorText[result.error])
  const ephemeris = createEphemeris(result.propagator, now.getTime(), now.getTime())
  if (ephemeris.endedBy) throw refuse('between its epoch and now', propagationErrorText[ephemeris.endedBy])
}
