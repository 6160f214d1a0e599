import { and, inArray } from 'drizzle-orm'
import type { z } from 'zod'
import type { ElementSetOut, whichUnassigned } from '#shared/schemas/elements'
import type { Db } from '~~/server/database/client'
import { elementSets } from '~~/server/database/schema'
import { recordAudit, recordAudits } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { getElementSet } from './read-element-sets'
import { droppedReason } from './store-batch'
import { isHandled, isMeant } from './unassigned-sets'
import { findSet } from './use-element-set'

export type Handling = 'open' | 'kept' | 'dropped'
type Which = z.output<typeof whichUnassigned>

const rowsAtOnce = 5000
const actions: Record<Handling, string> = { open: 'element-set.reopen', kept: 'element-set.keep', dropped: 'element-set.drop' }

/**
 * What is done about sets that belong to no spacecraft: kept on purpose, dropped (refused, with that reason), or put back
 * to be decided on. All that the request means or none; sets that belong to somebody, or stand there already, are left.
 */
export async function handleUnassigned(deps: Deps, to: Handling, which: Which): Promise<{ changed: number }> {
  return deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    let changed = 0
    for (let ids = await change(inner, to, which); ids.length > 0; ids = await change(inner, to, which)) {
      changed += ids.length
      if (which.ids) await recordAudits(inner, ids.map(id => ({ action: actions[to], entityKind: 'element-set', entityId: id, after: valuesOf(deps, to) })))
    }
    // Two hundred thousand rows of the trail would say no more than one.
    if (!which.ids && changed > 0) await recordAudit(inner, { action: `${actions[to]}s`, entityKind: which.uploadId ? 'element-upload' : 'element-sets', entityId: which.uploadId ?? 'unassigned', after: { ...which, count: changed } })
    return { changed }
  })
}

/** The same for one set, which must belong to no spacecraft and not stand there already. */
export async function handleOneUnassigned(deps: Deps, to: 'kept' | 'dropped', { id }: { id: string }): Promise<ElementSetOut> {
  const { changed } = await handleUnassigned(deps, to, { ids: [id] })
  if (changed === 0) {
    const set = await findSet(deps.db, id)
    throw new DomainError('conflict', set.spacecraftId !== null ? 'This set belongs to a spacecraft: put it into use or refuse it there.' : `This set is ${to === 'kept' ? 'kept' : 'dropped'} already.`)
  }
  return getElementSet(deps, id)
}

function valuesOf({ now, actor }: Deps, to: Handling): Partial<typeof elementSets.$inferInsert> {
  if (to === 'dropped') return { state: 'refused', keptAt: null, decidedAt: now, decidedBy: actor.name, reason: droppedReason }
  return { state: 'waiting', keptAt: to === 'kept' ? now : null, decidedAt: null, decidedBy: null, reason: null }
}

const others: Record<Handling, readonly [Handling, Handling]> = { open: ['kept', 'dropped'], kept: ['open', 'dropped'], dropped: ['open', 'kept'] }

async function change(deps: Deps & { db: Db }, to: Handling, which: Which): Promise<string[]> {
  const { db } = deps
  // A whole search or upload means what lies open, or what is on the pile that is looked at; named ones wherever they are.
  const from = which.ids ? others[to] : [which.handling ?? (to === 'open' ? 'dropped' : 'open')]
  for (const handling of from) {
    if (handling === to) continue
    const some = db.select({ id: elementSets.id }).from(elementSets).where(and(isHandled(handling), isMeant(db, which))).limit(rowsAtOnce).for('update')
    const rows = await db.update(elementSets).set(valuesOf(deps, to)).where(inArray(elementSets.id, some)).returning({ id: elementSets.id })
    if (rows.length > 0) return rows.map(({ id }) => id)
  }
  return []
}
