import { sql } from 'drizzle-orm'
import type { RevisionState } from '#shared/table-life'
import { at } from '../alerts/coming-tables'
import type { Deps } from '../context'

export interface WantingTable { id: string, linkName: string, direction: 'uplink' | 'downlink', state: RevisionState, standsDown: boolean, isOut: boolean }

/** One pass that wants one antenna, by the radio that its tables are made for. */
export interface Want {
  antennaId: string
  antennaName: string
  setupS: number
  stationId: string
  stationName: string
  stationZone: string
  passId: string
  spacecraftId: string
  spacecraftName: string
  priority: number
  aosMs: number
  losMs: number
  maxElevationDeg: number
  busyFromMs: number
  busyToMs: number
  tables: WantingTable[]
}

interface Row extends Record<string, unknown> {
  antenna_id: string
  antenna: string
  setup_s: number
  station_id: string
  station: string
  zone: string
  pass_id: string
  spacecraft_id: string
  spacecraft: string
  priority: number
  aos: string
  los: string
  max_elevation_deg: number
  from_ms: number
  to_ms: number
  tables: WantingTable[]
}

export interface WantsQuery { from: Date, to: Date, stationId?: string, antennaId?: string }

/**
 * Passes with AOS in [from, to) and the antennas they want: from the set-up time before the workable part to its end. A table that
 * is held for another reason, withdrawn or lapsed wants none; one that stands down still does.
 */
export async function loadWants({ db }: Pick<Deps, 'db'>, { from, to, stationId, antennaId }: WantsQuery): Promise<Want[]> {
  const { rows } = await db.execute<Row>(sql`
    WITH wanting AS (
      SELECT DISTINCT ON (t.id, ra.antenna_id) ra.antenna_id, t.pass_id, t.id, l.name, l.direction, r.state, r.stands_down, r."check" -> 'workable' AS workable,
        bool_or(r.state IN ('published','collected')) OVER (PARTITION BY t.id, ra.antenna_id) AS is_out
      FROM passes p JOIN tables t ON t.pass_id = p.id JOIN links l ON l.id = t.link_id AND l.retired_at IS NULL
      JOIN table_revisions r ON r.table_id = t.id AND (r.state IN ('drafted','approved','published','collected') OR r.state IN ('held','withdrawn') AND r.stands_down)
      JOIN radios ra ON ra.id = r.radio_id
      WHERE p.aos >= ${at(from)} AND p.aos < ${at(to)} AND p.gone_at IS NULL
        ${stationId ? sql`AND p.station_id = ${stationId}` : sql``} ${antennaId ? sql`AND ra.antenna_id = ${antennaId}` : sql``}
      ORDER BY t.id, ra.antenna_id, r.number DESC)
    SELECT a.id AS antenna_id, a.name AS antenna, a.setup_s, st.id AS station_id, st.name AS station, st.zone, p.id AS pass_id, p.spacecraft_id, sc.name AS spacecraft, sc.priority,
      p.aos, p.los, p.max_elevation_deg,
      min(extract(epoch FROM (w.workable -> 0 ->> 'from')::timestamptz) * 1000)::double precision - a.setup_s * 1000 AS from_ms,
      max(extract(epoch FROM (w.workable -> -1 ->> 'to')::timestamptz) * 1000)::double precision AS to_ms,
      json_agg(json_build_object('id', w.id, 'linkName', w.name, 'direction', w.direction, 'state', w.state, 'standsDown', w.stands_down, 'isOut', w.is_out) ORDER BY w.direction, w.name) AS tables
    FROM wanting w JOIN passes p ON p.id = w.pass_id JOIN antennas a ON a.id = w.antenna_id
    JOIN stations st ON st.id = p.station_id AND st.retired_at IS NULL JOIN spacecraft sc ON sc.id = p.spacecraft_id AND sc.retired_at IS NULL
    WHERE jsonb_array_length(w.workable) > 0
    GROUP BY a.id, st.id, p.id, sc.id ORDER BY from_ms, p.id`)
  return rows.map(row => ({
    antennaId: row.antenna_id, antennaName: row.antenna, setupS: row.setup_s, stationId: row.station_id, stationName: row.station, stationZone: row.zone,
    passId: row.pass_id, spacecraftId: row.spacecraft_id, spacecraftName: row.spacecraft, priority: row.priority,
    aosMs: Date.parse(row.aos), losMs: Date.parse(row.los), maxElevationDeg: row.max_elevation_deg, busyFromMs: row.from_ms, busyToMs: row.to_ms, tables: row.tables,
  }))
}
