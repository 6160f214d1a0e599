import { sql } from 'drizzle-orm'
import type { DigestDecision, DigestPass } from '~~/server/mail/digest-letter'
import type { Deps } from '../context'
import { at, comingTables } from '../alerts/coming-tables'

export interface Night { passes: DigestPass[], decisions: DigestDecision[], verdicts: { holds: number, tight: number, breaks: number } }

interface PassRow extends Record<string, unknown> { aos: string, los: string, spacecraft: string, station: string, tables: number }
interface TableRow extends Record<string, unknown> { aos: string, spacecraft: string, station: string, link: string, state: string, verdict: keyof Night['verdicts'], worst_hz: number, allowance_hz: number, undecided: boolean }

/** What a night holds: passes by AOS, what waits for a decision, and how the newest revisions stand. */
export async function readNight({ db }: Pick<Deps, 'db'>, from: Date, to: Date): Promise<Night> {
  const within = sql`p.aos >= ${at(from)} AND p.aos < ${at(to)} AND p.gone_at IS NULL`
  const passes = await db.execute<PassRow>(sql`
    SELECT p.aos, p.los, sc.name AS spacecraft, st.name AS station, (SELECT count(*)::int FROM tables t WHERE t.pass_id = p.id) AS tables
    FROM passes p JOIN spacecraft sc ON sc.id = p.spacecraft_id AND sc.retired_at IS NULL JOIN stations st ON st.id = p.station_id AND st.retired_at IS NULL
    WHERE ${within} ORDER BY p.aos, sc.name`)
  const tables = await db.execute<TableRow>(sql`
    SELECT * FROM (
      SELECT DISTINCT ON (t.id) p.aos, sc.name AS spacecraft, st.name AS station, l.name AS link, r.state, r.verdict,
        (r."check" ->> 'worstResidualHz')::double precision AS worst_hz, (r."check" ->> 'allowanceHz')::double precision AS allowance_hz,
        r.state = 'drafted' OR r.state = 'approved' AND r.verdict = 'breaks' AND r.seconded_by IS NULL AS undecided
      FROM ${comingTables}
      JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('drafted','approved','held','published','collected')
      WHERE ${within} ORDER BY t.id, r.number DESC) newest
    ORDER BY aos, spacecraft, link`)
  const verdicts = { holds: 0, tight: 0, breaks: 0 }
  for (const { verdict } of tables.rows) verdicts[verdict]++
  return {
    passes: passes.rows.map(row => ({ aos: new Date(row.aos), los: new Date(row.los), spacecraftName: row.spacecraft, stationName: row.station, tables: row.tables })),
    decisions: tables.rows.filter(({ undecided }) => undecided).map(row => ({
      aos: new Date(row.aos), spacecraftName: row.spacecraft, stationName: row.station, linkName: row.link, state: row.state, verdict: row.verdict, worstResidualHz: row.worst_hz, allowanceHz: row.allowance_hz,
    })),
    verdicts,
  }
}
