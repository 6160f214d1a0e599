import { eq } from 'drizzle-orm'
import { stations } from '~~/server/database/schema'
import type { Deps } from '../context'
import type { Calendar } from './read-calendar'
import { readCalendar } from './read-calendar'

/** The calendar of a station, for its own controller. */
export async function readStationCalendar(deps: Pick<Deps, 'db' | 'now'>, stationId: string): Promise<Calendar> {
  const [station] = await deps.db.select({ name: stations.name }).from(stations).where(eq(stations.id, stationId))
  return readCalendar(deps, { stationId, name: `Passes at ${station!.name}` })
}
