import { audit } from '~~/server/database/schema'
import type { Deps } from './context'
import { actorId } from './context'

export interface AuditEntry {
  action: string
  entityKind: string
  entityId: string
  tableId?: string
  reason?: string | null
  before?: unknown
  after?: unknown
}

/** Writes one row of the trail; called inside the transaction that makes the change. */
export async function recordAudit(deps: Deps, entry: AuditEntry): Promise<void> {
  await recordAudits(deps, [entry])
}

export async function recordAudits({ db, actor, now }: Deps, entries: readonly AuditEntry[]): Promise<void> {
  for (let start = 0; start < entries.length; start += 500) {
    await db.insert(audit).values(entries.slice(start, start + 500).map(entry => ({
      at: now,
      actorKind: actor.kind,
      actorId: actorId(actor),
      actorName: actor.name,
      action: entry.action,
      entityKind: entry.entityKind,
      entityId: entry.entityId,
      tableId: entry.tableId ?? null,
      reason: entry.reason ?? null,
      before: entry.before ?? null,
      after: entry.after ?? null,
    })))
  }
}
