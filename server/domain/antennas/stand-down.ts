import { and, desc, eq, inArray } from 'drizzle-orm'
import { randomUUID } from 'node:crypto'
import type { Verdict } from '#shared/physics/types'
import { canMove, stateAfterRecomputation } from '#shared/table-life'
import { audit, tableRevisions } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import type { LockedTable, RevisionRow } from '../tables/lock-table'
import { stateAudit } from '../tables/state-audit'
import { tableEvent } from '../web-hooks/table-event'
import { tellHooks } from '../web-hooks/tell-hooks'

/** What a revision was before it stood down, as the trail keeps it. */
interface Before { state: 'drafted' | 'approved' | 'held', reason: string | null, verdict: Verdict }

/** What is not out is held; what is out is withdrawn, by a person only. The approval stays on the row for when the antenna comes back. */
export async function standDown(deps: Deps, table: LockedTable, reason: string): Promise<void> {
  const { db, now, actor } = deps
  const { open, out } = table
  if (open && canMove(open.state, 'stand-down', actor.kind === 'person' ? 'person' : 'schedule')) {
    await db.update(tableRevisions).set({ state: 'held', standsDown: true, reason, heldAt: now, updatedAt: now }).where(eq(tableRevisions.id, open.id))
    await recordAudit(deps, stateAudit('table.stand-down', { tableId: table.id, revisionId: open.id, revision: open.number, from: open.state, to: 'held', reason, before: { reason: open.reason, verdict: open.verdict } }))
  }
  if (out && actor.kind === 'person') {
    await db.update(tableRevisions).set({ state: 'withdrawn', standsDown: true, reason, withdrawnAt: now, updatedAt: now }).where(eq(tableRevisions.id, out.id))
    await recordAudit(deps, stateAudit('table.withdraw', { tableId: table.id, revisionId: out.id, revision: out.number, from: out.state, to: 'withdrawn', reason }))
    await tellHooks(deps, 'table.withdrawn', tableEvent(table, out, { reason, withdrawnBy: actor.name }))
  }
}

/** Gives a table back what it was before it stood down; what was withdrawn for it comes again as a revision of the same rows, approved as that was. */
export async function standUp(deps: Deps, table: LockedTable, reason: string): Promise<void> {
  const { db } = deps
  const stood = await db.select().from(tableRevisions).where(and(eq(tableRevisions.tableId, table.id), eq(tableRevisions.standsDown, true), inArray(tableRevisions.state, ['held', 'withdrawn']))).orderBy(desc(tableRevisions.number))
  const held = stood.find(({ state }) => state === 'held')
  const withdrawn = stood.find(({ state }) => state === 'withdrawn')
  if (withdrawn) await db.update(tableRevisions).set({ standsDown: false }).where(eq(tableRevisions.id, withdrawn.id))
  if (held) await release(deps, held, reason)
  else if (withdrawn && !table.open && !table.out) await comeAgain(deps, withdrawn, table.newest.number + 1, reason)
}

async function release(deps: Deps, held: RevisionRow, why: string): Promise<void> {
  const { db, now } = deps
  const [row] = await db.select({ before: audit.before }).from(audit).where(and(eq(audit.tableId, held.tableId), eq(audit.entityId, held.id), eq(audit.action, 'table.stand-down'))).orderBy(desc(audit.id)).limit(1)
  const before = row?.before as Before | undefined
  const state = before?.state === 'approved' ? stateAfterRecomputation('approved', before.verdict, held.verdict) : 'drafted'
  const lost = state === 'approved' ? {} : { approvedById: null, approvedBy: null, approvedAt: null, secondedById: null, secondedBy: null }
  const reason = before?.state === 'approved' && state === 'drafted' ? `Its verdict went from ${before.verdict} to ${held.verdict} while it stood down` : before?.reason ?? null
  await db.update(tableRevisions).set({ state, reason, standsDown: false, heldAt: null, updatedAt: now, ...lost }).where(eq(tableRevisions.id, held.id))
  await recordAudit(deps, stateAudit('table.stand-up', { tableId: held.tableId, revisionId: held.id, revision: held.number, from: 'held', to: state, reason: why }))
}

async function comeAgain(deps: Deps, { verdict, radioId, elementSetId, retunes, check, inputsDigest, tableId, ...row }: RevisionRow, number: number, reason: string): Promise<void> {
  const { db, now } = deps
  const { approvedById, approvedBy, approvedAt, secondedById, secondedBy } = row
  const id = randomUUID()
  await db.insert(tableRevisions).values({ id, tableId, number, state: 'approved', verdict, radioId, elementSetId, retunes, check, inputsDigest, reason, approvedById, approvedBy, approvedAt, secondedById, secondedBy, createdAt: now, updatedAt: now })
  await recordAudit(deps, stateAudit('table.draft', { tableId, revisionId: id, revision: number, from: null, to: 'approved', reason }))
}
