import { sql } from 'drizzle-orm'
import { formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import type { Cause, CauseScope } from './cause'
import { at, comingTables } from './coming-tables'

interface Row extends Record<string, unknown> { station_id: string, station: string, tables: number, first_aos: string, first_table: string, what: string }

/** Stations whose last word on a table that they should use is that they refused it. */
export async function findStationRefused({ db, now }: Pick<Deps, 'db' | 'now'>, scope: CauseScope = {}): Promise<Cause[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT p.station_id, st.name AS station, count(*)::int AS tables, min(p.aos) AS first_aos, (array_agg(t.id ORDER BY p.aos, t.id))[1] AS first_table,
      string_agg(sc.name || ', ' || l.name || ': ' || coalesce(report.reason, 'no reason given'), '; ' ORDER BY p.aos, l.name) AS what
    FROM ${comingTables}
    JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('published','collected')
    JOIN LATERAL (SELECT s.outcome, s.reason FROM station_reports s WHERE s.revision_id = r.id ORDER BY s.at DESC, s.id LIMIT 1) report ON report.outcome = 'refused'
    WHERE p.los > ${at(now)} ${scope.stationId ? sql`AND p.station_id = ${scope.stationId}` : sql``}
    GROUP BY p.station_id, st.name`)
  return rows.map((row) => {
    const first = new Date(row.first_aos)
    return {
      kind: 'station-refused',
      cause: `station-refused:${row.station_id}`,
      severity: 'call',
      title: `${row.station} refused ${row.tables === 1 ? 'a table' : `${row.tables} tables`}`,
      detail: `First AOS ${formatUtc(first.getTime(), 'second')}. It says: ${row.what.slice(0, 400)}.`,
      action: 'Call the station about its reason. If the table is wrong, withdraw it; if the controller is, have the table loaded again.',
      stationId: row.station_id,
      tableId: row.first_table,
      dueAt: first,
      count: row.tables,
      weight: row.tables,
      raises: true,
    } satisfies Cause
  })
}
