import { createHash } from 'node:crypto'
import { sql } from 'drizzle-orm'
import type { CalendarPass } from '#shared/formats/pass-calendar'
import type { Deps } from '../context'

export interface Calendar {
  name: string
  passes: CalendarPass[]
  /** Equal for equal content. */
  tag: string
}
interface Row extends Record<string, unknown> { id: string, calendar_sequence: number, spacecraft: string, station: string, aos: string, culmination: string, los: string, max_elevation_deg: number, gone_at: string | null }

const daysBack = 7
/** More than a person's calendar bears; the coming ones come first. */
const mostPasses = 5000

/** Passes of the last seven days and all that are predicted, those that have gone marked; of one station, or of all. `pagesUrl` gives each its page. */
export async function readCalendar({ db, now }: Pick<Deps, 'db' | 'now'>, { stationId, name, pagesUrl }: { stationId: string | null, name: string, pagesUrl?: string }): Promise<Calendar> {
  const { rows } = await db.execute<Row>(sql`
    SELECT p.id, p.calendar_sequence, sc.name AS spacecraft, s.name AS station, p.aos, p.culmination, p.los, p.max_elevation_deg, p.gone_at
    FROM passes p JOIN spacecraft sc ON sc.id = p.spacecraft_id JOIN stations s ON s.id = p.station_id
    WHERE p.aos > ${now.toISOString()}::timestamptz - ${daysBack} * interval '1 day' ${stationId === null ? sql`` : sql`AND p.station_id = ${stationId}`}
    ORDER BY p.los < ${now.toISOString()}::timestamptz, p.aos, p.id LIMIT ${mostPasses}`)
  const passes = rows.map(row => ({
    id: row.id, sequence: row.calendar_sequence, spacecraftName: row.spacecraft, stationName: row.station, aos: new Date(row.aos), culmination: new Date(row.culmination), los: new Date(row.los),
    maxElevationDeg: row.max_elevation_deg, gone: row.gone_at !== null, ...(pagesUrl ? { url: `${pagesUrl}/passes/${row.id}` } : {}),
  })).sort((a, b) => a.aos.getTime() - b.aos.getTime() || (a.id < b.id ? -1 : 1))
  return { name, passes, tag: createHash('sha256').update(JSON.stringify([name, passes])).digest('base64url') }
}
