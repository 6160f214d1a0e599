import { and, asc, eq, isNull } from 'drizzle-orm'
import type { z } from 'zod'
import type { calendarAddressOut, calendarAddressMade } from '#shared/schemas/calendars'
import { calendarAddresses, people, stations } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { hashToken, newToken } from '../auth/tokens'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { DomainError } from '../errors'

/** Whose calendar: a person's has all stations, a station's its own. */
export type CalendarOwner = { personId: string } | { stationId: string }
type AddressOut = z.infer<typeof calendarAddressOut>

/** One for each program is enough; a lost one is revoked. */
const mostEach = 5
const ofOwner = (owner: CalendarOwner) => and('personId' in owner ? eq(calendarAddresses.personId, owner.personId) : eq(calendarAddresses.stationId, owner.stationId), isNull(calendarAddresses.revokedAt))
const toOut = ({ id, createdBy, createdAt, lastUsedAt }: typeof calendarAddresses.$inferSelect): AddressOut => ({ id, createdBy, createdAt: createdAt.toISOString(), lastUsedAt: lastUsedAt?.toISOString() ?? null })

/** The addresses that work, oldest first; the secret in them is not known any more. */
export async function listCalendarAddresses({ db }: Pick<Deps, 'db'>, owner: CalendarOwner): Promise<{ items: AddressOut[], nextCursor: null }> {
  if ('stationId' in owner) requireFound((await db.select({ id: stations.id }).from(stations).where(eq(stations.id, owner.stationId)))[0], 'station')
  const rows = await db.select().from(calendarAddresses).where(ofOwner(owner)).orderBy(asc(calendarAddresses.createdAt), asc(calendarAddresses.id))
  return { items: rows.map(toOut), nextCursor: null }
}

/** Makes an address with 256 secret bits and gives it, this once; only its SHA-256 is kept. `calendarsUrl` is what it begins with. */
export async function makeCalendarAddress(deps: Deps, { owner, calendarsUrl }: { owner: CalendarOwner, calendarsUrl: string }): Promise<z.infer<typeof calendarAddressMade>> {
  const token = newToken()
  return deps.db.transaction(async (tx) => {
    const [found] = 'personId' in owner
      ? await tx.select({ id: people.id }).from(people).where(eq(people.id, owner.personId)).for('update')
      : await tx.select({ id: stations.id }).from(stations).where(and(eq(stations.id, owner.stationId), isNull(stations.retiredAt))).for('update')
    requireFound(found, 'personId' in owner ? 'person' : 'station')
    if (await tx.$count(calendarAddresses, ofOwner(owner)) >= mostEach) throw new DomainError('conflict', `There are ${mostEach} calendar addresses: revoke one first.`)
    const [row] = await tx.insert(calendarAddresses).values({ ...owner, tokenHash: hashToken(token), createdBy: deps.actor.name, createdAt: deps.now }).returning()
    await recordAudit({ ...deps, db: tx }, { action: 'calendar.make', entityKind: 'calendar-address', entityId: row!.id, after: owner })
    return { ...toOut(row!), url: `${calendarsUrl}/${token}.ics` }
  })
}

/** The address answers no more. Revoking twice changes nothing; another's is not found. */
export async function revokeCalendarAddress(deps: Deps, { owner, id }: { owner: CalendarOwner, id: string }): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const [row] = await tx.select().from(calendarAddresses).where(eq(calendarAddresses.id, id)).for('update')
    const mine = row && ('personId' in owner ? row.personId === owner.personId : row.stationId === owner.stationId)
    const address = requireFound(mine ? row : undefined, 'calendar address')
    if (address.revokedAt) return
    await tx.update(calendarAddresses).set({ revokedAt: deps.now }).where(eq(calendarAddresses.id, id))
    await recordAudit({ ...deps, db: tx }, { action: 'calendar.revoke', entityKind: 'calendar-address', entityId: id, before: { revokedAt: null }, after: { ...owner, revokedAt: deps.now.toISOString() } })
  })
}
