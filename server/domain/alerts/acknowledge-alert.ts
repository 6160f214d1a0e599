import { eq } from 'drizzle-orm'
import type { AlertOut } from '#shared/schemas/alerts'
import { alerts } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { readAlert } from './read-alerts'
import { requireAlert } from './require-alert'

/** Somebody has seen it and deals with it. Acknowledging twice changes nothing: the first name stays. */
export async function acknowledgeAlert(given: Deps, alertId: string): Promise<AlertOut> {
  return await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    const { alert, person } = await requireAlert(deps, alertId)
    if (alert.state === 'closed') throw new DomainError('conflict', `This alert was closed by ${alert.closedBy}: there is nothing left to acknowledge.`)
    if (alert.state === 'open') {
      await tx.update(alerts).set({ state: 'acknowledged', acknowledgedAt: deps.now, acknowledgedById: person.id, acknowledgedBy: person.name }).where(eq(alerts.id, alertId))
      await recordAudit(deps, { action: 'alert.acknowledge', entityKind: 'alert', entityId: alertId, tableId: alert.tableId ?? undefined, before: { state: 'open' }, after: { state: 'acknowledged' } })
    }
    return await readAlert(deps, alertId)
  })
}
