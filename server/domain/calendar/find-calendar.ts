import { and, eq, isNull } from 'drizzle-orm'
import { calendarAddresses, people, stations } from '~~/server/database/schema'
import { hashToken } from '../auth/tokens'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import type { Calendar } from './read-calendar'
import { readCalendar } from './read-calendar'

/** The calendar behind a private address: nobody's that was revoked, of a disabled person or a retired station. */
export async function findCalendar({ db, now }: Pick<Deps, 'db' | 'now'>, { token, pagesUrl }: { token: string, pagesUrl: string }): Promise<Calendar> {
  const [row] = await db.select({ id: calendarAddresses.id, lastUsedAt: calendarAddresses.lastUsedAt, stationId: calendarAddresses.stationId, station: stations.name }).from(calendarAddresses)
    .leftJoin(people, eq(people.id, calendarAddresses.personId)).leftJoin(stations, eq(stations.id, calendarAddresses.stationId))
    .where(and(eq(calendarAddresses.tokenHash, hashToken(token)), isNull(calendarAddresses.revokedAt), isNull(people.disabledAt), isNull(stations.retiredAt)))
  if (!row) throw new DomainError('not-found', 'There is nothing under this address.')
  // Calendars are asked for by the quarter of an hour: once a minute is enough to know.
  if (!row.lastUsedAt || now.getTime() - row.lastUsedAt.getTime() > 60_000) await db.update(calendarAddresses).set({ lastUsedAt: now }).where(eq(calendarAddresses.id, row.id))
  return readCalendar({ db, now }, { stationId: row.stationId, name: row.station === null ? 'Passes' : `Passes at ${row.station}`, pagesUrl })
}
