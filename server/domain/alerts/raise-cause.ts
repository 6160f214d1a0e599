import { eq, sql } from 'drizzle-orm'
import { alerts } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { alertEvent } from '../web-hooks/alert-event'
import { tellHooks } from '../web-hooks/tell-hooks'
import type { Cause } from './cause'
import { flutterMs, worseFactor } from './cause'
import type { LastClosed } from './last-closed'
import { lastClosedOf } from './last-closed'
import { tellPeople } from './tell-people'

export type Alert = typeof alerts.$inferSelect

/** What an alert is closed by, and why, when its cause goes away by itself. */
export const goneBy = 'Schedule'
export const goneReason = 'The cause is gone.'
const flutterNote = ' It came back within half an hour of going away by itself: no second mail was sent.'

/** Raises the alert of a cause, or brings the standing one up to date. Call it inside a transaction. */
export async function raiseCause(deps: Deps, cause: Cause): Promise<void> {
  const [standing] = await deps.db.select().from(alerts).where(sql`${alerts.cause} = ${cause.cause} AND ${alerts.state} <> 'closed'`).for('update')
  if (standing) await updateAlert(deps, standing, cause)
  else await openAlert(deps, cause, (await lastClosedOf(deps, [cause.cause])).get(cause.cause) ?? null)
}

export async function openAlert(deps: Deps, cause: Cause, last: LastClosed | null): Promise<void> {
  const { db, now } = deps
  if (!cause.raises) return
  if (last !== null && last.setAsideWeight !== null && cause.weight < worseFactor * last.setAsideWeight) return
  const flutters = last !== null && last.closedBy === goneBy && last.closeReason === goneReason && now.getTime() - last.closedAt.getTime() < flutterMs
  const [opened] = await db.insert(alerts).values({ ...rowOf(cause), cause: cause.cause, kind: cause.kind, severity: cause.severity, detail: cause.detail + (flutters ? flutterNote : ''), openedAt: now })
    .onConflictDoNothing({ target: alerts.cause, where: sql`${alerts.state} <> 'closed'` }).returning()
  // Another server was faster.
  if (!opened) return
  await recordAudit(deps, { action: 'alert.open', entityKind: 'alert', entityId: opened.id, tableId: cause.tableId, reason: flutters ? flutterNote.trim() : null, after: { cause: cause.cause, severity: cause.severity, count: cause.count } })
  await tellHooks(deps, 'alert.opened', alertEvent(opened))
  if (!flutters) await tellPeople(deps, opened.id)
}

/** Newer figures change the words and mail nobody; a notice that becomes a call is open again and mails those who are called. */
export async function updateAlert(deps: Deps, alert: Alert, cause: Cause): Promise<void> {
  const { db } = deps
  const rises = !cause.keepsWords && alert.severity === 'notice' && cause.severity === 'call'
  const words = cause.keepsWords ? { count: Math.max(cause.count, 1) } : { ...rowOf(cause), detail: cause.detail + (alert.detail.endsWith(flutterNote) ? flutterNote : '') }
  const raised = rises ? { severity: 'call' as const, state: 'open' as const, acknowledgedAt: null, acknowledgedBy: null, acknowledgedById: null } : {}
  const change = { ...words, ...raised }
  if (Object.entries(change).every(([key, value]) => isSame(alert[key as keyof Alert], value))) return
  await db.update(alerts).set(change).where(eq(alerts.id, alert.id))
  if (!rises) return
  await recordAudit(deps, { action: 'alert.raise', entityKind: 'alert', entityId: alert.id, tableId: cause.tableId, before: { severity: 'notice', state: alert.state }, after: { severity: 'call', state: 'open' } })
  await tellPeople(deps, alert.id, { raised: true })
}

function rowOf({ title, detail, action, spacecraftId, stationId, tableId, dueAt, count }: Cause) {
  return { title, detail, action, spacecraftId: spacecraftId ?? null, stationId: stationId ?? null, tableId: tableId ?? null, dueAt: dueAt ?? null, count }
}

const isSame = (one: unknown, other: unknown) => one instanceof Date && other instanceof Date ? one.getTime() === other.getTime() : one === other
