import { eq } from 'drizzle-orm'
import { may } from '#shared/permissions'
import { alerts } from '~~/server/database/schema'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import type { Alert } from './raise-cause'

const isDecision = ({ kind }: Alert) => kind === 'decision-due' || kind === 'antenna-conflict'

/** The alert, locked, if this person may act on it: operators on decisions that are due, on-call and administrators on any. */
export async function requireAlert({ db, actor }: Deps, alertId: string): Promise<{ alert: Alert, person: PersonActor, mayActOnAny: boolean }> {
  if (actor.kind !== 'person') throw new DomainError('not-allowed', 'Only a person deals with an alert.')
  const [alert] = await db.select().from(alerts).where(eq(alerts.id, alertId)).for('update')
  if (!alert) throw new DomainError('not-found', 'There is no such alert.')
  const mayActOnAny = may(actor.roles, 'alerts:act-on-any')
  if (!mayActOnAny && !(may(actor.roles, 'alerts:act') && isDecision(alert))) {
    throw new DomainError('not-allowed', 'Operators deal with decisions that are due; this alert is for the on-call engineer.')
  }
  return { alert, person: actor, mayActOnAny }
}
