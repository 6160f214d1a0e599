import { and, eq, gte, inArray, isNull, lt, sql } from 'drizzle-orm'
import { eveningInstants } from '#shared/publication-slots'
import { links, passes, slots, spacecraft, stations, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import type { DueTable } from './publish-approved'
import { describePublished, publishApproved } from './publish-approved'
import type { Slot } from './slot'
import { claimSlot, finishSlot, lateness, releaseSlot } from './slot'

type Station = typeof stations.$inferSelect

/** Slots missed for longer are not looked for any more. */
const lookBackMs = 7 * 24 * 3600_000
/** How long a slot comes back for tables that are being computed anew. */
const stalePatienceMs = 10 * 60_000
const dayMs = 24 * 3600_000

/** Evening slots of all stations that are due and not done, oldest first. A station owes none from before it was entered. */
export async function findDueNights({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<{ station: Station, instant: Date }[]> {
  const all = await db.select().from(stations).where(isNull(stations.retiredAt))
  const done = await db.select({ entity: slots.entity, instant: slots.instant }).from(slots)
    .where(and(eq(slots.kind, 'publish-night'), gte(slots.instant, new Date(now.getTime() - lookBackMs))))
  const known = new Set(done.map(slot => `${slot.entity}:${slot.instant.getTime()}`))
  return all.flatMap(station => eveningInstants(station, Math.max(now.getTime() - lookBackMs, station.createdAt.getTime()), now.getTime() + 1)
    .filter(ms => !known.has(`${station.id}:${ms}`))
    .map(ms => ({ station, instant: new Date(ms) })))
    .sort((one, other) => one.instant.getTime() - other.instant.getTime())
}

/** Publishes what is approved for the passes from this evening until the next. Late it does what is left to do, and says how late. */
export async function publishNight(given: Deps, { station, instant }: { station: Station, instant: Date }): Promise<void> {
  const slot: Slot = { kind: 'publish-night', entity: station.id, instant }
  await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    if (!await claimSlot(deps, slot)) return
    const next = new Date(eveningInstants(station, instant.getTime() + 1, instant.getTime() + 3 * dayMs)[0]!)
    if (next <= deps.now) return finishSlot(deps, slot, `Missed: found ${lateness(instant, deps.now)}, when its passes were over or with the next evening.`)
    const done = await publishApproved(deps, await dueTables(deps, station, instant, next))
    if (done.refused.stale && deps.now.getTime() - instant.getTime() < stalePatienceMs) return releaseSlot(deps, slot)
    await finishSlot(deps, slot, `${describePublished({ ...done, published: await countPublished(deps, station, instant, next) })}, ${lateness(instant, deps.now)}.`)
  })
}

const spanned = (station: Station, from: Date, to: Date) => and(eq(passes.stationId, station.id), gte(passes.aos, from), lt(passes.aos, to), isNull(passes.goneAt))

async function dueTables({ db, now }: Deps, station: Station, from: Date, to: Date): Promise<DueTable[]> {
  const unfrozen = new Date(now.getTime() + station.freezeMinutes * 60_000)
  return await db.select({ tableId: tables.id, spacecraftId: spacecraft.id, spacecraftName: spacecraft.name, stationId: stations.id, stationName: stations.name, linkName: links.name, aos: passes.aos })
    .from(tables)
    .innerJoin(tableRevisions, and(eq(tableRevisions.tableId, tables.id), eq(tableRevisions.state, 'approved')))
    .innerJoin(passes, eq(passes.id, tables.passId))
    .innerJoin(links, eq(links.id, tables.linkId))
    .innerJoin(spacecraft, eq(spacecraft.id, passes.spacecraftId))
    .innerJoin(stations, eq(stations.id, passes.stationId))
    .where(and(spanned(station, from, to), sql`${passes.aos} > ${unfrozen.toISOString()}`))
    .orderBy(passes.aos, tables.id)
}

/** All that went out in this slot, also in runs that gave it back. */
async function countPublished({ db, actor }: Deps, station: Station, from: Date, to: Date): Promise<number> {
  const rows = await db.select({ id: tableRevisions.id }).from(tableRevisions)
    .innerJoin(tables, eq(tables.id, tableRevisions.tableId))
    .innerJoin(passes, eq(passes.id, tables.passId))
    .where(and(spanned(station, from, to), inArray(tableRevisions.state, ['published', 'collected']), gte(tableRevisions.publishedAt, from), eq(tableRevisions.publishedBy, actor.name)))
  return rows.length
}
