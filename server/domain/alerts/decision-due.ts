import { sql } from 'drizzle-orm'
import { decisionCallMinutes, decisionDueMinutes } from '#shared/table-life'
import { formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import type { Cause } from './cause'
import { at, comingTables, leadSlot } from './coming-tables'

interface Row extends Record<string, unknown> { pass_id: string, spacecraft_id: string, spacecraft: string, station_id: string, station: string, aos: string, tables: number, first_table: string, what: string }

/** How long after its last slot an approved table counts as left behind. */
const slotGraceMs = 60_000

/**
 * Passes within the hour with a table that will lapse unless somebody acts: drafted still, approved without the second
 * person that a breaking one needs, or approved after the schedule's last slot for it.
 */
export async function findDecisionDue({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<Cause[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT p.id AS pass_id, p.spacecraft_id, sc.name AS spacecraft, p.station_id, st.name AS station, p.aos, count(*)::int AS tables,
      (array_agg(t.id ORDER BY l.name))[1] AS first_table,
      string_agg(l.name || ' (' || r.state || ', ' || r.verdict || ')', ', ' ORDER BY l.name) AS what
    FROM ${comingTables}
    JOIN table_revisions r ON r.table_id = t.id
    WHERE p.aos > ${at(now)} AND p.aos <= ${at(new Date(now.getTime() + decisionDueMinutes * 60_000))} AND p.gone_at IS NULL
      AND (r.state = 'drafted' OR r.state = 'approved' AND (
        r.verdict = 'breaks' AND r.seconded_by IS NULL
        OR ${leadSlot} < ${at(new Date(now.getTime() - slotGraceMs))}))
    GROUP BY p.id, sc.name, st.name`)
  return rows.map((row) => {
    const aos = new Date(row.aos)
    const isCall = aos.getTime() - now.getTime() <= decisionCallMinutes * 60_000
    return {
      kind: 'decision-due',
      cause: `decision-due:${row.pass_id}`,
      severity: isCall ? 'call' : 'notice',
      title: `${row.spacecraft} at ${row.station}: ${row.tables === 1 ? 'a table waits' : `${row.tables} tables wait`} for a decision`,
      detail: `AOS ${formatUtc(aos.getTime(), 'second')}. Not published yet: ${row.what}. What is not published at AOS lapses, and the station keeps what it had before.`,
      action: 'Open the pass, then approve and publish the tables, or hold them with a reason.',
      spacecraftId: row.spacecraft_id,
      stationId: row.station_id,
      tableId: row.first_table,
      dueAt: aos,
      count: row.tables,
      weight: isCall ? 2 : 1,
      raises: true,
    } satisfies Cause
  })
}
