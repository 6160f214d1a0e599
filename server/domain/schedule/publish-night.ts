import { and, eq, gte, inArray, isNull, lt, sql } from 'drizzle-orm'
import type { SQL } from 'drizzle-orm'
import { eveningInstants } from '#shared/publication-slots'
import { links, passes, publicationRules, slots, spacecraft, stations, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import type { DueEvening, EveningPlan } from './evenings'
import { entityOf } from './evenings'
import type { DueTable } from './publish-approved'
import { describePublished, publishApproved } from './publish-approved'
import type { Slot } from './slot'
import { claimSlot, finishSlot, lateness, releaseSlot } from './slot'

/** How long a slot comes back for tables that are being computed anew. */
const stalePatienceMs = 10 * 60_000
const dayMs = 24 * 3600_000

/** Publishes what is approved for the passes from this evening until the next. Late it does what is left to do, and says how late. */
export async function publishNight(given: Deps, evening: DueEvening): Promise<void> {
  const { rule, instant } = evening
  const slot: Slot = { kind: 'publish-night', entity: entityOf(evening), instant }
  await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    if (!await claimSlot(deps, slot)) return
    const next = new Date(eveningInstants(rule, instant.getTime() + 1, instant.getTime() + 3 * dayMs)[0]!)
    if (next <= deps.now) return finishSlot(deps, slot, `Missed: found ${lateness(instant, deps.now)}, when its passes were over or with the next evening.`)
    const done = await publishApproved(deps, await dueTables(deps, evening, next))
    if (done.refused.stale && deps.now.getTime() - instant.getTime() < stalePatienceMs) return releaseSlot(deps, slot)
    await finishSlot(deps, slot, `${describePublished({ ...done, published: await countPublished(deps, evening, next) })}, ${lateness(instant, deps.now)}.`)
  })
}

/** Tables of a plan with AOS in [from, to): of the link with its own time, or of all others at the station. */
function covered({ station, link }: EveningPlan, from: Date, to: Date): SQL | undefined {
  return and(
    eq(passes.stationId, station.id), gte(passes.aos, from), lt(passes.aos, to), isNull(passes.goneAt),
    link ? eq(tables.linkId, link.id) : sql`NOT EXISTS (SELECT 1 FROM ${publicationRules} WHERE ${publicationRules.stationId} = ${passes.stationId} AND ${publicationRules.linkId} = ${tables.linkId} AND ${publicationRules.publishAt} IS NOT NULL)`,
  )
}

async function dueTables({ db, now }: Deps, evening: DueEvening, to: Date): Promise<DueTable[]> {
  const unfrozen = new Date(now.getTime() + evening.station.freezeMinutes * 60_000)
  return await db.select({ tableId: tables.id, spacecraftId: spacecraft.id, spacecraftName: spacecraft.name, stationId: stations.id, stationName: stations.name, linkName: links.name, aos: passes.aos })
    .from(tables)
    .innerJoin(tableRevisions, and(eq(tableRevisions.tableId, tables.id), eq(tableRevisions.state, 'approved')))
    .innerJoin(passes, eq(passes.id, tables.passId))
    .innerJoin(links, eq(links.id, tables.linkId))
    .innerJoin(spacecraft, eq(spacecraft.id, passes.spacecraftId))
    .innerJoin(stations, eq(stations.id, passes.stationId))
    .where(and(covered(evening, evening.instant, to), sql`${passes.aos} > ${unfrozen.toISOString()}`))
    .orderBy(passes.aos, tables.id)
}

/** All that went out in this slot, also in runs that gave it back; what a slot before a pass published is not of it. */
async function countPublished({ db, actor }: Deps, evening: DueEvening, to: Date): Promise<number> {
  const rows = await db.select({ id: tableRevisions.id }).from(tableRevisions)
    .innerJoin(tables, eq(tables.id, tableRevisions.tableId))
    .innerJoin(passes, eq(passes.id, tables.passId))
    .where(and(covered(evening, evening.instant, to), inArray(tableRevisions.state, ['published', 'collected']), gte(tableRevisions.publishedAt, evening.instant), eq(tableRevisions.publishedBy, actor.name),
      sql`NOT EXISTS (SELECT 1 FROM ${slots} WHERE ${slots.kind} = 'publish-lead' AND ${slots.entity} = ${tables.id}::text AND ${slots.doneAt} <= ${tableRevisions.publishedAt})`))
  return rows.length
}
