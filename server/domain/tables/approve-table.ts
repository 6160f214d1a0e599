import { eq } from 'drizzle-orm'
import { may } from '#shared/permissions'
import type { TableBrief } from '#shared/schemas/tables'
import { needsSecondPerson } from '#shared/table-life'
import { tableRevisions } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import type { LockedTable, RevisionRow } from './lock-table'
import { lockTable } from './lock-table'
import { requireMove, requireOpen } from './require-decidable'
import { stateAudit } from './state-audit'
import { getBrief } from './table-brief'

/**
 * Approves a drafted table. One that breaks is approved by two: the second, who may be on call, stands behind what the
 * first has approved.
 */
export async function approveTable({ db, actor, now }: Deps<PersonActor>, { id, revision }: { id: string, revision?: number }): Promise<TableBrief> {
  return db.transaction(async (tx) => {
    const deps = { db: tx, actor, now }
    const table = await lockTable(deps, id)
    const open = requireOpen(table, 'approve', now, revision)
    if (open.state === 'approved' && needsSecondPerson(open.verdict)) await second(deps, table, open)
    else await approve(deps, table, open)
    return getBrief(deps, id)
  })
}

async function approve(deps: Deps<PersonActor>, table: LockedTable, open: RevisionRow): Promise<void> {
  const { db, actor, now } = deps
  requireMove(open, 'approve')
  if (!may(actor.roles, 'tables:decide')) {
    throw new DomainError('not-allowed', 'On call you stand as the second person for a table that breaks; an operator approves it first.')
  }
  await db.update(tableRevisions).set({ state: 'approved', approvedById: actor.id, approvedBy: actor.name, approvedAt: now, secondedById: null, secondedBy: null, updatedAt: now }).where(eq(tableRevisions.id, open.id))
  await recordAudit(deps, stateAudit('table.approve', { tableId: table.id, revisionId: open.id, revision: open.number, from: open.state, to: 'approved' }))
}

async function second(deps: Deps<PersonActor>, table: LockedTable, open: RevisionRow): Promise<void> {
  const { db, actor, now } = deps
  if (open.secondedBy !== null) throw new DomainError('conflict', `${open.approvedBy} and ${open.secondedBy} have approved revision ${open.number} already: it can be published.`)
  if (open.approvedById === actor.id) throw new DomainError('conflict', 'This table breaks: a second person, another operator or whoever is on call, has to approve it too.')
  await db.update(tableRevisions).set({ secondedById: actor.id, secondedBy: actor.name, updatedAt: now }).where(eq(tableRevisions.id, open.id))
  await recordAudit(deps, stateAudit('table.second', { tableId: table.id, revisionId: open.id, revision: open.number, from: 'approved', to: 'approved' }))
}
