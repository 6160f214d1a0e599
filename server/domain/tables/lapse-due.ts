import { and, asc, eq, inArray, lte } from 'drizzle-orm'
import { openStates } from '#shared/table-life'
import { passes, tableRevisions, tables } from '~~/server/database/schema'
import { recordAudits } from '../audit'
import type { Deps } from '../context'
import { stateAudit } from './state-audit'

const BATCH = 500

export interface LapsedTable { tableId: string, revisionId: string, revision: number, aos: Date }

/** What is not out when its pass begins lapses, and the trail says so. Bounded; run again while it gives as many as a batch. */
export async function lapseDue({ db, actor, now }: Deps): Promise<LapsedTable[]> {
  return db.transaction(async (tx) => {
    const due = await tx.select({ tableId: tables.id, aos: passes.aos }).from(tables)
      .innerJoin(passes, eq(passes.id, tables.passId))
      .innerJoin(tableRevisions, eq(tableRevisions.tableId, tables.id))
      .where(and(inArray(tableRevisions.state, [...openStates]), lte(passes.aos, now)))
      .orderBy(asc(tables.id)).limit(BATCH).for('update', { of: tables })
    if (due.length === 0) return []
    const aosOf = new Map(due.map(row => [row.tableId, row.aos]))
    // Read after the lock: a decision may have come between.
    const open = await tx.select({ id: tableRevisions.id, tableId: tableRevisions.tableId, number: tableRevisions.number, state: tableRevisions.state }).from(tableRevisions)
      .where(and(inArray(tableRevisions.tableId, [...aosOf.keys()]), inArray(tableRevisions.state, [...openStates])))
    if (open.length === 0) return []
    await tx.update(tableRevisions).set({ state: 'lapsed', reason: 'Not published when the pass began.', lapsedAt: now, updatedAt: now }).where(inArray(tableRevisions.id, open.map(row => row.id)))
    await recordAudits({ db: tx, actor, now }, open.map(({ id, tableId, number, state }) =>
      stateAudit('table.lapse', { tableId, revisionId: id, revision: number, from: state, to: 'lapsed', reason: 'Not published when the pass began.' })))
    return open.map(({ id, tableId, number }) => ({ tableId, revisionId: id, revision: number, aos: aosOf.get(tableId)! }))
  })
}
