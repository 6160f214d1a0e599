import { eq } from 'drizzle-orm'
import type { TableBrief } from '#shared/schemas/tables'
import { tableRevisions } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import { tableEvent } from '../web-hooks/table-event'
import { tellHooks } from '../web-hooks/tell-hooks'
import { lockTable } from './lock-table'
import { requireMove } from './require-decidable'
import { stateAudit } from './state-audit'
import { getBrief } from './table-brief'

/** Takes back what the station gets; it is told that the table is gone. A newer revision that is not out stays as it is. */
export async function withdrawTable({ db, actor, now }: Deps<PersonActor>, { id, reason }: { id: string, reason: string }): Promise<TableBrief> {
  return db.transaction(async (tx) => {
    const deps = { db: tx, actor, now }
    const table = await lockTable(deps, id)
    const { out, newest } = table
    if (!out) throw new DomainError('conflict', `Revision ${newest.number} is ${newest.state}: the station has nothing of this table that could be withdrawn.`)
    requireMove(out, 'withdraw')
    await tx.update(tableRevisions).set({ state: 'withdrawn', reason, withdrawnAt: now, updatedAt: now }).where(eq(tableRevisions.id, out.id))
    await recordAudit(deps, stateAudit('table.withdraw', { tableId: id, revisionId: out.id, revision: out.number, from: out.state, to: 'withdrawn', reason }))
    await tellHooks(deps, 'table.withdrawn', tableEvent(table, out, { reason, withdrawnBy: actor.name }))
    return getBrief(deps, id)
  })
}
