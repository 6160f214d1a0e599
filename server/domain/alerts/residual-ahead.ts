import { sql } from 'drizzle-orm'
import { formatHz, formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import type { Cause, CauseScope } from './cause'
import { at, comingTables } from './coming-tables'
import { standing } from './publication-failed'

const aheadMs = 48 * 3600_000
/** An alert closes when every margin has this, so that a residual at the edge does not open and close it in turn. */
const closingMargin = 1.05

interface Row extends Record<string, unknown> { spacecraft_id: string, spacecraft: string, link_id: string, link: string, breaking: number, stations: number, margin: number, worst_hz: number, allowance_hz: number, first_aos: string | null, first_table: string | null }

/** Tables of the next two days whose residual is beyond the allowance, by spacecraft and link: a limit made too strict breaks forty tables for one cause. */
export async function findResidualAhead({ db, now }: Pick<Deps, 'db' | 'now'>, scope: CauseScope = {}): Promise<Cause[]> {
  const { rows } = await db.execute<Row>(sql`
    WITH newest AS (
      SELECT DISTINCT ON (t.id) t.id, p.aos, p.spacecraft_id, p.station_id, sc.name AS spacecraft, t.link_id, l.name AS link, r.state,
        coalesce((r."check" ->> 'margin')::double precision, 1e9) AS margin,
        coalesce((r."check" ->> 'margin')::double precision < 1, false) AS breaks, (r."check" ->> 'worstResidualHz')::double precision AS worst_hz, (r."check" ->> 'allowanceHz')::double precision AS allowance_hz
      FROM ${comingTables}
      JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('drafted','approved','held','published','collected')
      WHERE p.aos > ${at(now)} AND p.aos <= ${at(new Date(now.getTime() + aheadMs))} AND p.gone_at IS NULL
        ${scope.spacecraftId ? sql`AND p.spacecraft_id = ${scope.spacecraftId}` : sql``}
      ORDER BY t.id, r.number DESC)
    SELECT spacecraft_id, spacecraft, link_id, link, min(margin) AS margin,
      count(*) FILTER (WHERE breaks)::int AS breaking, count(DISTINCT station_id) FILTER (WHERE breaks)::int AS stations,
      (array_agg(worst_hz ORDER BY margin))[1] AS worst_hz, (array_agg(allowance_hz ORDER BY margin))[1] AS allowance_hz,
      min(aos) FILTER (WHERE breaks) AS first_aos, (array_agg(id ORDER BY aos, id) FILTER (WHERE breaks))[1] AS first_table
    FROM newest WHERE margin < ${closingMargin} AND state <> 'held'
    GROUP BY spacecraft_id, spacecraft, link_id, link`)
  return rows.map((row) => {
    const cause = `residual-ahead:${row.spacecraft_id}:${row.link_id}`
    // Between the edge and the closing margin nothing breaks any more, and the words of what did still tell the story.
    if (row.first_aos === null || row.first_table === null) return standing('residual-ahead', cause)
    const first = new Date(row.first_aos)
    return {
      kind: 'residual-ahead',
      cause,
      severity: 'call',
      title: `${row.spacecraft}: the residual on ${row.link} is beyond its allowance`,
      detail: `${tablesOf(row.breaking)} of the next 48 hours at ${row.stations === 1 ? 'one station' : `${row.stations} stations`} ${row.breaking === 1 ? 'breaks' : 'break'}, the first with AOS ${formatUtc(first.getTime(), 'second')}. Worst budgeted residual ${formatHz(row.worst_hz)} Hz; the link bears ${formatHz(row.allowance_hz)} Hz.`,
      action: `Compare the link’s limits with what was meant, look at the age of the element set and at the error budget of the first table. Newer elements, a finer radio or a wider limit make it hold; a table that breaks goes out only with a second person.`,
      spacecraftId: row.spacecraft_id,
      tableId: row.first_table,
      dueAt: first,
      count: row.breaking,
      weight: 1 / row.margin,
      raises: true,
    } satisfies Cause
  })
}

const tablesOf = (count: number) => count === 1 ? 'One table' : `${count} tables`
