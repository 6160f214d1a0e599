import { sql } from 'drizzle-orm'
import { collectionDueMinutes } from '#shared/table-life'
import { formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import type { Cause } from './cause'
import { at, comingTables } from './coming-tables'

interface Row extends Record<string, unknown> { station_id: string, station: string, tables: number, first_aos: string, first_table: string, what: string }

/** Published tables that their station has not fetched shortly before AOS, by station: a controller that stopped asking is one cause. */
export async function findNotCollected({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<Cause[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT p.station_id, st.name AS station, count(*)::int AS tables, min(p.aos) AS first_aos, (array_agg(t.id ORDER BY p.aos, t.id))[1] AS first_table,
      string_agg(sc.name || ', ' || l.name, '; ' ORDER BY p.aos, l.name) AS what
    FROM ${comingTables}
    JOIN table_revisions r ON r.table_id = t.id AND r.state = 'published'
    WHERE p.aos <= ${at(new Date(now.getTime() + collectionDueMinutes * 60_000))} AND p.los > ${at(now)} AND p.gone_at IS NULL
    GROUP BY p.station_id, st.name`)
  return rows.map((row) => {
    const first = new Date(row.first_aos)
    return {
      kind: 'not-collected',
      cause: `not-collected:${row.station_id}`,
      severity: 'call',
      title: `${row.station} has not fetched ${row.tables === 1 ? 'a table' : `${row.tables} tables`}`,
      detail: `Published, and not collected ${collectionDueMinutes} minutes before AOS ${formatUtc(first.getTime(), 'second')}: ${row.what.slice(0, 300)}.`,
      action: 'Call the station: is its controller running, does its key still work, can it reach this server? If need be, read the table out from its page and have it entered by hand.',
      stationId: row.station_id,
      tableId: row.first_table,
      dueAt: first,
      count: row.tables,
      weight: row.tables,
      raises: true,
    } satisfies Cause
  })
}
