import { eq, inArray } from 'drizzle-orm'
import type { ElementSetOut } from '#shared/schemas/elements'
import { elementSets, spacecraft } from '~~/server/database/schema'
import { recordAudits } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { getElementSet } from './read-element-sets'
import { droppedReason } from './store-batch'

type Row = Pick<typeof elementSets.$inferSelect, 'id' | 'spacecraftId' | 'state' | 'reason' | 'useAt'>

/** Why a set cannot be given to a spacecraft; null where it can. */
function obstacle({ spacecraftId, state, reason, useAt }: Row, to: string): string | null {
  if (spacecraftId === to) return 'This set belongs to this spacecraft already.'
  if (state === 'in-use' || state === 'past') return 'This set is or was in use and stays with its spacecraft: put another into use there instead.'
  if (state === 'refused' && !(spacecraftId === null && reason === droppedReason)) return 'This set was refused; upload it anew or choose another.'
  return useAt === null ? null : 'This set is to be put into use at an instant: take that back first.'
}

/**
 * Gives sets to a spacecraft, for which they wait from then on: what matched none, dropped ones among them, or a waiting
 * set that was taken for another's. All or none.
 */
export async function assignElementSets(deps: Deps, { ids, spacecraftId }: { ids: readonly string[], spacecraftId: string }): Promise<{ changed: number }> {
  await deps.db.transaction(async (tx) => {
    const [craft] = await tx.select({ name: spacecraft.name, retiredAt: spacecraft.retiredAt }).from(spacecraft).where(eq(spacecraft.id, spacecraftId)).for('share')
    const noSuch = 'There is no such spacecraft, or it has been retired: choose one that flies.'
    if (!craft || craft.retiredAt) throw new DomainError('not-valid', `spacecraftId: ${noSuch}`, [{ path: 'spacecraftId', message: noSuch }])
    const { id, state, reason, useAt } = elementSets
    const rows: Row[] = await tx.select({ id, spacecraftId: elementSets.spacecraftId, state, reason, useAt }).from(elementSets).where(inArray(id, [...ids])).orderBy(id).for('update')
    if (rows.length < new Set(ids).size) throw new DomainError('not-found', ids.length === 1 ? 'There is no element set under this address.' : 'One of these element sets is not there: reload and choose again.')
    for (const row of rows) {
      const why = obstacle(row, spacecraftId)
      if (why) throw new DomainError('conflict', why)
    }
    await tx.update(elementSets).set({ spacecraftId, state: 'waiting', keptAt: null, decidedAt: null, decidedBy: null, reason: null }).where(inArray(id, rows.map(row => row.id)))
    await recordAudits({ ...deps, db: tx }, rows.map(row => ({ action: 'element-set.assign', entityKind: 'element-set', entityId: row.id, before: { spacecraftId: row.spacecraftId, state: row.state }, after: { spacecraftId, state: 'waiting' } })))
  })
  return { changed: new Set(ids).size }
}

export async function assignElementSet(deps: Deps, { id, spacecraftId }: { id: string, spacecraftId: string }): Promise<ElementSetOut> {
  await assignElementSets(deps, { ids: [id], spacecraftId })
  return getElementSet(deps, id)
}
