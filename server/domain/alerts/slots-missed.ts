import { and, eq, gt, ne } from 'drizzle-orm'
import { alerts } from '~~/server/database/schema'
import type { Deps } from '../context'
import type { Cause } from './cause'
import { standing } from './publication-failed'

/** What an outage missed is history after a day, and its alert goes. */
const tellsForMs = 24 * 3600_000

/** Standing alerts of slots that an outage missed; the schedule raises them when it wakes. */
export async function findSlotsMissed({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<Cause[]> {
  const rows = await db.select({ cause: alerts.cause, count: alerts.count }).from(alerts)
    .where(and(eq(alerts.kind, 'slots-missed'), ne(alerts.state, 'closed'), gt(alerts.openedAt, new Date(now.getTime() - tellsForMs))))
  return rows.map(({ cause, count }) => standing('slots-missed', cause, count))
}
