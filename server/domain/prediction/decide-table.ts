import { approvedByRule, canMove, stateAfterRecomputation } from '#shared/table-life'
import type { tableRevisions } from '~~/server/database/schema'
import type { PlannedTable, PredictedTable, Recheck } from '~~/server/workers/tasks/predict-station'
import type { AuditEntry } from '../audit'
import { stateAudit } from '../tables/state-audit'
import type { ServedLink } from './load-inputs'
import type { KnownRevision, KnownTable } from './load-known'

export type RevisionInsert = typeof tableRevisions.$inferInsert & { id: string }
type OpenState = 'drafted' | 'approved' | 'held'

interface Approval {
  approvedById: string | null
  approvedBy: string | null
  approvedAt: Date | null
  secondedById: string | null
  secondedBy: string | null
}

/** An open revision with the rows it has from now on; null rows leave it as it is and change its state only. */
export interface RevisionChange extends Approval {
  id: string
  state: OpenState
  reason: string | null
  rows: (PlannedTable & { radioId: string, elementSetId: string, inputsDigest: string }) | null
}

/** What a prediction makes of one table. */
export interface TableDecision { insert?: RevisionInsert, change?: RevisionChange, lapse?: { id: string, reason: string }, audits: AuditEntry[] }

export interface TableCase {
  readonly tableId: string
  readonly known: KnownTable | null
  readonly served: ServedLink
  readonly predicted: PredictedTable
  /** Of all that this pass's table is made of. */
  readonly digest: string
  readonly elementSetId: string
  /** Why the prediction was made, in words. */
  readonly reason: string
  readonly now: Date
  readonly newId: () => string
}

const ruleName = 'Rule: approve what holds'
const noApproval: Approval = { approvedById: null, approvedBy: null, approvedAt: null, secondedById: null, secondedBy: null }
const approvalOf = ({ approvedById, approvedBy, approvedAt, secondedById, secondedBy }: KnownRevision): Approval => ({ approvedById, approvedBy, approvedAt, secondedById, secondedBy })

/** What happens to one table after a prediction, by the life of a table (shared/table-life.ts). */
export function decideTable(given: TableCase): TableDecision {
  const { known, predicted, reason } = given
  const open = known?.open ?? null
  if (predicted.kind === 'not-workable') return open ? lapse(given.tableId, open, `The pass no longer rises above the link’s minimum elevation. ${reason}`) : { audits: [] }
  if (predicted.planned) return open ? recompute(given, open, predicted.planned) : draft(given, predicted.planned)
  if (open?.state === 'drafted' && open.reason === null && approvedByRule(given.served.link.approveWhatHolds, open.verdict)) {
    return { change: { id: open.id, state: 'approved', reason: null, rows: null, ...ruleApproval(given) }, audits: [ruleAudit(given, open.id, open.number)] }
  }
  return { audits: [] }
}

export function lapse(tableId: string, open: KnownRevision, reason: string): TableDecision {
  return { lapse: { id: open.id, reason }, audits: [stateAudit('table.lapse', { tableId, revisionId: open.id, revision: open.number, from: open.state, to: 'lapsed', reason })] }
}

/** An unpublished revision is recomputed in place: approval stays unless the verdict worsens; a hold stays. */
function recompute(given: TableCase, open: KnownRevision, planned: PlannedTable): TableDecision {
  const before = open.state as OpenState
  const kept = stateAfterRecomputation(before, open.verdict, planned.verdict)
  const change: RevisionChange = { id: open.id, state: kept, reason: open.reason, rows: rowsOf(given, planned), ...approvalOf(open) }
  const audits: AuditEntry[] = []
  const anew = given.known?.out && given.predicted.recheck ? whyAnew(given.known.out, given.predicted.recheck, given.reason) : null
  if (kept !== before) {
    const returned = `Its verdict went from ${open.verdict} to ${planned.verdict}`
    const reason = anew ? `${returned}; ${anew}` : `${returned}: ${given.reason}`
    Object.assign(change, noApproval, { reason })
    audits.push(stateAudit('table.return-to-draft', { tableId: given.tableId, revisionId: open.id, revision: open.number, from: before, to: kept, reason }))
  }
  else if (before !== 'held' && anew) change.reason = anew
  if (change.state === 'drafted' && !given.known?.takenBack && approvedByRule(given.served.link.approveWhatHolds, planned.verdict)) {
    Object.assign(change, ruleApproval(given), { state: 'approved' })
    audits.push(ruleAudit(given, open.id, open.number))
  }
  return { change, audits }
}

/** A new revision: the first, or after one that is out and has moved, or after one that lapsed or was withdrawn. What a person took back waits for a person, whatever the link's rule. */
function draft(given: TableCase, planned: PlannedTable): TableDecision {
  const { known, tableId, now, predicted } = given
  const last = known?.last ?? null
  const number = (last?.number ?? 0) + 1
  const id = given.newId()
  const reason = known?.out
    ? whyAnew(known.out, predicted.recheck!, given.reason)
    : last?.state === 'withdrawn' ? `Revision ${last.number} was withdrawn (${last.reason}); computed anew: ${given.reason}` : null
  const isCarried = known?.out && stateAfterRecomputation('approved', known.out.verdict, planned.verdict) === 'approved'
  const isByRule = !isCarried && !known?.takenBack && approvedByRule(given.served.link.approveWhatHolds, planned.verdict)
  const approval = isCarried ? approvalOf(known.out!) : isByRule ? ruleApproval(given) : noApproval
  const state = isCarried || isByRule ? 'approved' : 'drafted'
  const audits = [stateAudit('table.draft', { tableId, revisionId: id, revision: number, from: null, to: isCarried ? 'approved' : 'drafted', reason })]
  if (isByRule) audits.push(ruleAudit(given, id, number))
  const { radioId, elementSetId, inputsDigest, verdict, retunes, check } = rowsOf(given, planned)
  return { insert: { id, tableId, number, state, verdict, radioId, elementSetId, retunes, check, inputsDigest, reason, ...approval, updatedAt: now, createdAt: now }, audits }
}

const rowsOf = ({ served, elementSetId, digest }: TableCase, planned: PlannedTable) => ({ ...planned, radioId: served.radio.id, elementSetId, inputsDigest: digest })

/** By how much the published rows have moved, for whoever reads why there is a newer revision. */
function whyAnew(out: Pick<KnownRevision, 'verdict' | 'worstResidualHz'>, recheck: Recheck, reason: string): string {
  const hz = Math.abs(recheck.worstResidualHz - out.worstResidualHz)
  const verdict = recheck.verdict === out.verdict ? '' : `${out.verdict} → ${recheck.verdict}, `
  return `${verdict}moves by ${hz < 10 ? hz.toFixed(1) : Math.round(hz)} Hz: ${reason}`
}

function ruleApproval({ now }: TableCase): Approval {
  return { ...noApproval, approvedBy: ruleName, approvedAt: now }
}

function ruleAudit({ tableId }: TableCase, revisionId: string, number: number): AuditEntry {
  if (!canMove('drafted', 'approve', 'rule')) throw new Error('The life of a table lets no rule approve.')
  return stateAudit('table.approve', { tableId, revisionId, revision: number, from: 'drafted', to: 'approved', reason: ruleName })
}
