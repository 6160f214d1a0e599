import type { alerts } from '~~/server/database/schema'
import { pageAddress } from '~~/server/mail/addresses'

type AlertRow = typeof alerts.$inferSelect

/** What a message about an alert holds: which, how bad, of what, and where to read it. */
export function alertEvent(alert: Pick<AlertRow, 'id' | 'kind' | 'severity' | 'title' | 'spacecraftId' | 'stationId' | 'tableId' | 'dueAt' | 'count'>, more: Record<string, unknown> = {}): Record<string, unknown> {
  const { id, kind, severity, title, spacecraftId, stationId, tableId, dueAt, count } = alert
  return { alertId: id, kind, severity, title, ...more, spacecraftId, stationId, tableId, dueAt: dueAt?.toISOString() ?? null, count, address: pageAddress(`/alerts/${id}`) }
}
