import { sql } from 'drizzle-orm'
import { at } from '../alerts/coming-tables'
import type { Deps } from '../context'

/** Passes of a station with AOS in [from, to): of one link, or of all that have no time of day of their own. */
export interface Window { readonly stationId: string, readonly linkId: string | null, readonly from: Date, readonly to: Date }
export interface WouldPublish { approved: number, undecided: number }

/** What would go out for each window if its slot came now, and what nobody has decided on; in the order of the windows. */
export async function countWouldPublish({ db, now }: Pick<Deps, 'db' | 'now'>, windows: readonly Window[]): Promise<WouldPublish[]> {
  if (windows.length === 0) return []
  const { rows } = await db.execute<{ i: number, approved: number, undecided: number }>(sql`
    SELECT w.i, count(*) FILTER (WHERE ready)::int AS approved, count(*) FILTER (WHERE NOT ready AND state <> 'held')::int AS undecided
    FROM jsonb_to_recordset(${JSON.stringify(windows.map((window, i) => ({ i, ...window })))}::jsonb) AS w(i int, "stationId" uuid, "linkId" uuid, "from" timestamptz, "to" timestamptz)
    JOIN passes p ON p.station_id = w."stationId" AND p.aos >= w."from" AND p.aos < w."to" AND p.aos > ${at(now)} AND p.gone_at IS NULL
    JOIN tables t ON t.pass_id = p.id AND (w."linkId" IS NULL OR t.link_id = w."linkId")
    JOIN LATERAL (SELECT r.state, r.state = 'approved' AND (r.verdict <> 'breaks' OR r.seconded_by IS NOT NULL) AS ready
      FROM table_revisions r WHERE r.table_id = t.id AND r.state IN ('drafted','approved','held')) open ON true
    WHERE w."linkId" IS NOT NULL OR NOT EXISTS (SELECT 1 FROM publication_rules own WHERE own.station_id = p.station_id AND own.link_id = t.link_id AND own.publish_at IS NOT NULL)
    GROUP BY w.i`)
  const found = new Map(rows.map(({ i, approved, undecided }) => [i, { approved, undecided }]))
  return windows.map((_, i) => found.get(i) ?? { approved: 0, undecided: 0 })
}
