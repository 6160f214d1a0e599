import { eq } from 'drizzle-orm'
import type { AlertOut } from '#shared/schemas/alerts'
import { alerts } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { alertEvent } from '../web-hooks/alert-event'
import { tellHooks } from '../web-hooks/tell-hooks'
import { findCauses } from './find-causes'
import { readAlert } from './read-alerts'
import { requireAlert } from './require-alert'

/**
 * Closes an alert. While its cause stands that is setting it aside, by on-call or an administrator only;
 * it then calls again when the cause has been gone and comes back, or is worse by a fifth.
 */
export async function closeAlert(given: Deps, input: { alertId: string, reason?: string }): Promise<AlertOut> {
  const { alertId, reason } = input
  return await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    const { alert, person, mayActOnAny } = await requireAlert(deps, alertId)
    if (alert.state === 'closed') throw new DomainError('conflict', `This alert was closed already by ${alert.closedBy}.`)
    const causes = await findCauses(deps, { kinds: [alert.kind] })
    const cause = causes.find(one => one.cause === alert.cause)
    if (cause && !mayActOnAny) throw new DomainError('not-allowed', 'The cause still stands: decide on the tables, and the alert closes by itself. Only on-call or an administrator may set it aside.')
    await tx.update(alerts).set({ state: 'closed', closedAt: deps.now, closedBy: person.name, closeReason: closeReasonOf(cause !== undefined, reason) }).where(eq(alerts.id, alertId))
    const entry = { entityKind: 'alert', entityId: alertId, tableId: alert.tableId ?? undefined, reason: reason ?? null }
    await recordAudit(deps, { ...entry, action: 'alert.close', before: { state: alert.state }, after: { state: 'closed' } })
    await tellHooks(deps, 'alert.closed', alertEvent(alert, { closedBy: person.name, reason: closeReasonOf(cause !== undefined, reason) }))
    if (cause) await recordAudit(deps, { ...entry, action: 'alert.set-aside', after: { weight: cause.weight } })
    return await readAlert(deps, alertId)
  })
}

function closeReasonOf(stands: boolean, reason: string | undefined): string {
  if (!stands) return reason ?? 'Closed after the cause was gone.'
  return reason === undefined ? 'Set aside while it stands.' : `Set aside while it stands: ${reason}`
}
