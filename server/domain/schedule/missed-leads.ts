import { sql } from 'drizzle-orm'
import { slots } from '~~/server/database/schema'
import { at, comingTables, leadSlot } from '../alerts/coming-tables'
import type { Deps } from '../context'
import { lateness, leadNotDone } from './slot'

const BATCH = 500
/** Passes that began longer ago are not looked for any more. */
const lookBackMs = 7 * 24 * 3600_000

interface Row extends Record<string, unknown> { table_id: string, due: string, aos: string, freeze: number, state: string }

/**
 * Slots before a pass that nobody ran until the station's freeze time began, as while the server was down: recorded, with
 * what the table was then. Before the tables lapse, or nothing would tell that they had been owed a slot.
 */
export async function recordMissedLeads({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<number> {
  const { rows } = await db.execute<Row>(sql`
    SELECT t.id AS table_id, ${leadSlot} AS due, p.aos, st.freeze_minutes AS freeze, r.state
    FROM ${comingTables}
    JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('drafted','approved','held')
    WHERE p.gone_at IS NULL AND p.aos > ${at(new Date(now.getTime() - lookBackMs))}
      AND p.aos - make_interval(mins => st.freeze_minutes) <= ${at(now)}
      AND coalesce(pr.lead_minutes, st.publish_lead_minutes) > st.freeze_minutes AND r.created_at < ${leadSlot}
      AND ${leadNotDone(now)}
    ORDER BY p.aos, t.id LIMIT ${BATCH}`)
  if (rows.length === 0) return 0
  await db.insert(slots).values(rows.map((row) => {
    const due = new Date(row.due)
    const when = new Date(row.aos) <= now ? 'when the pass had begun' : `inside the last ${row.freeze} minutes before AOS`
    return { kind: 'publish-lead' as const, entity: row.table_id, instant: due, doneAt: now, outcome: `Missed: found ${lateness(due, now)}, ${when}; the table was ${row.state}.` }
  })).onConflictDoNothing()
  return rows.length
}
