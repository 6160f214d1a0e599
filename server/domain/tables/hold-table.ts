import { and, desc, eq, inArray } from 'drizzle-orm'
import type { TableBrief } from '#shared/schemas/tables'
import { audit, tableRevisions } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps, PersonActor } from '../context'
import { lockTable } from './lock-table'
import { requireMove, requireOpen } from './require-decidable'
import { stateAudit } from './state-audit'
import { getBrief } from './table-brief'

/** Keeps a table back, with a reason, until somebody releases it. What the station has stays. */
export async function holdTable({ db, actor, now }: Deps<PersonActor>, { id, reason, revision }: { id: string, reason: string, revision?: number }): Promise<TableBrief> {
  return db.transaction(async (tx) => {
    const deps = { db: tx, actor, now }
    const table = await lockTable(deps, id)
    const open = requireOpen(table, 'hold', now, revision)
    requireMove(open, 'hold')
    await tx.update(tableRevisions).set({
      state: 'held', reason, heldAt: now, updatedAt: now, approvedById: null, approvedBy: null, approvedAt: null, secondedById: null, secondedBy: null,
    }).where(eq(tableRevisions.id, open.id))
    await recordAudit(deps, stateAudit('table.hold', { tableId: id, revisionId: open.id, revision: open.number, from: open.state, to: 'held', reason, before: { reason: open.reason } }))
    return getBrief(deps, id)
  })
}

/** Back to drafted, with the reason it had before it was held: it waits for a decision again. */
export async function releaseTable({ db, actor, now }: Deps<PersonActor>, { id, revision }: { id: string, revision?: number }): Promise<TableBrief> {
  return db.transaction(async (tx) => {
    const deps = { db: tx, actor, now }
    const table = await lockTable(deps, id)
    const open = requireOpen(table, 'release', now, revision)
    requireMove(open, 'release')
    const [held] = await tx.select({ before: audit.before }).from(audit)
      .where(and(eq(audit.tableId, id), eq(audit.entityId, open.id), inArray(audit.action, ['table.hold', 'table.stand-down']))).orderBy(desc(audit.id)).limit(1)
    const reason = (held?.before as { reason?: string | null } | undefined)?.reason ?? null
    await tx.update(tableRevisions).set({ state: 'drafted', reason, standsDown: false, heldAt: null, updatedAt: now, approvedById: null, approvedBy: null, approvedAt: null, secondedById: null, secondedBy: null }).where(eq(tableRevisions.id, open.id))
    await recordAudit(deps, stateAudit('table.release', { tableId: id, revisionId: open.id, revision: open.number, from: 'held', to: 'drafted', before: { reason: open.reason } }))
    return getBrief(deps, id)
  })
}
