import { and, eq, inArray, ne } from 'drizzle-orm'
import { alerts } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { alertEvent } from '../web-hooks/alert-event'
import { tellHooks } from '../web-hooks/tell-hooks'
import type { CauseScope } from './cause'
import { allKinds, findCauses } from './find-causes'
import { lastClosedOf, setAside } from './last-closed'
import { goneBy, goneReason, openAlert, updateAlert } from './raise-cause'

/**
 * Holds the alerts against what is so now: what is new opens, what changed is written anew, what is gone closes.
 * Idempotent; two servers at once lead to one alert a cause.
 */
export async function reconcileAlerts(given: Deps, scope: CauseScope = {}): Promise<void> {
  await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    const kinds = scope.kinds ?? allKinds
    const causes = await findCauses(deps, scope)
    const standing = await tx.select().from(alerts).where(and(
      ne(alerts.state, 'closed'),
      inArray(alerts.kind, [...kinds]),
      scope.spacecraftId ? eq(alerts.spacecraftId, scope.spacecraftId) : undefined,
      scope.stationId ? eq(alerts.stationId, scope.stationId) : undefined,
    )).orderBy(alerts.cause).for('update')
    const closed = await lastClosedOf(deps, causes.map(({ cause }) => cause))
    for (const cause of causes) {
      const alert = standing.find(one => one.cause === cause.cause)
      if (alert) await updateAlert(deps, alert, cause)
      else await openAlert(deps, cause, closed.get(cause.cause) ?? null)
    }
    const present = new Set(causes.map(({ cause }) => cause))
    for (const alert of standing.filter(({ cause }) => !present.has(cause))) {
      await tx.update(alerts).set({ state: 'closed', closedAt: deps.now, closedBy: goneBy, closeReason: goneReason }).where(eq(alerts.id, alert.id))
      await recordAudit(deps, { action: 'alert.close', entityKind: 'alert', entityId: alert.id, tableId: alert.tableId ?? undefined, reason: goneReason, before: { state: alert.state }, after: { state: 'closed' } })
      await tellHooks(deps, 'alert.closed', alertEvent(alert, { closedBy: goneBy, reason: goneReason }))
    }
    // What was set aside and has gone calls again when it comes back.
    for (const past of await setAside(deps, kinds, scope)) {
      if (!present.has(past.cause)) await recordAudit(deps, { action: 'alert.cause-gone', entityKind: 'alert', entityId: past.alertId })
    }
  })
}
