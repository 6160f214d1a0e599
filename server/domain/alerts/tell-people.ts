import { and, arrayOverlaps, eq, isNull } from 'drizzle-orm'
import type { Role } from '#shared/permissions'
import { alerts, people, spacecraft, stations } from '~~/server/database/schema'
import { alertLetter } from '~~/server/mail/alert-letter'
import { queueMail } from '~~/server/mail/queue-mail'
import type { Deps } from '../context'
import { readSettings } from '../settings/read-settings'
import type { AlertKind, Severity } from './cause'

/** Whose work a notice is, where it is not flight dynamics' and on-call's. */
const noticed: Partial<Record<AlertKind, Role[]>> = { 'decision-due': ['operator'], 'antenna-conflict': ['operator'], 'slots-missed': ['operator', 'administrator'], 'web-hook-failing': ['administrator'] }

/** A call goes to on-call; a notice to those whose work it is. */
function rolesFor(kind: AlertKind, severity: Severity): Role[] {
  if (severity === 'call') return ['on-call']
  return noticed[kind] ?? ['flight-dynamics', 'on-call']
}

/** One mail to each person concerned, in the transaction that opens or raises the alert. */
export async function tellPeople({ db, now }: Pick<Deps, 'db' | 'now'>, alertId: string, { raised = false } = {}): Promise<void> {
  const [alert] = await db.select({ alert: alerts, spacecraftName: spacecraft.name, stationName: stations.name }).from(alerts)
    .leftJoin(spacecraft, eq(spacecraft.id, alerts.spacecraftId))
    .leftJoin(stations, eq(stations.id, alerts.stationId))
    .where(eq(alerts.id, alertId))
  if (!alert) return
  const { organisation } = await readSettings(db)
  const letter = alertLetter({ ...alert.alert, spacecraftName: alert.spacecraftName, stationName: alert.stationName, organisation, raised, now })
  const recipients = await db.select({ name: people.name, address: people.email }).from(people)
    .where(and(isNull(people.disabledAt), arrayOverlaps(people.roles, rolesFor(alert.alert.kind, alert.alert.severity))))
    .orderBy(people.email)
  for (const to of recipients) await queueMail({ db, now }, { kind: 'alert', to, alertId, ...letter })
}
