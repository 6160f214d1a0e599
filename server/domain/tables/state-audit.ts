import type { RevisionState } from '#shared/table-life'
import type { AuditEntry } from '../audit'

export type TableAction = 'table.draft' | 'table.approve' | 'table.second' | 'table.hold' | 'table.release' | 'table.stand-down' | 'table.stand-up' | 'table.return-to-draft'
  | 'table.publish' | 'table.collect' | 'table.supersede' | 'table.withdraw' | 'table.lapse'

interface Step {
  tableId: string
  revisionId: string
  revision: number
  from: RevisionState | null
  to: RevisionState
  reason?: string | null
  /** What else it was before, beside its state. */
  before?: object
}

/** One step of a revision's life in the trail; the table's history is read from these. */
export function stateAudit(action: TableAction, { tableId, revisionId, revision, from, to, reason, before }: Step): AuditEntry {
  return { action, entityKind: 'table-revision', entityId: revisionId, tableId, reason: reason ?? null, before: from ? { state: from, ...before } : null, after: { revision, state: to } }
}
