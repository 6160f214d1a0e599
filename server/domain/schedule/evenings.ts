import { and, eq, gte, inArray, isNotNull, isNull, lte, sql } from 'drizzle-orm'
import type { EveningRule } from '#shared/publication-slots'
import { eveningInstants } from '#shared/publication-slots'
import { audit, links, publicationRules, slots, stations } from '~~/server/database/schema'
import type { Deps } from '../context'
import { countsAsDone } from './slot'

export type StationRow = typeof stations.$inferSelect

/** Who is published at an evening's time: a station's links, or one link with a time of its own. */
export interface EveningPlan {
  readonly station: StationRow
  readonly link: { readonly id: string, readonly name: string } | null
  readonly rule: EveningRule
  /** Slots before this are not owed: station or rule came, or its time was changed, later. */
  readonly since: Date
}
export interface DueEvening extends EveningPlan { readonly instant: Date }

/** Slots missed for longer are not looked for any more. */
const lookBackMs = 7 * 24 * 3600_000

/** Names the plan in the list of slots. */
export const entityOf = ({ station, link }: Pick<EveningPlan, 'station' | 'link'>): string => link ? `${station.id}:${link.id}` : station.id

/** Every station in service, and every link of its own time there. */
export async function listEveningPlans({ db }: Pick<Deps, 'db'>): Promise<EveningPlan[]> {
  const all = await db.select().from(stations).where(isNull(stations.retiredAt))
  const own = await db.select({ rule: publicationRules, linkName: links.name }).from(publicationRules).innerJoin(links, eq(links.id, publicationRules.linkId))
    .where(and(isNotNull(publicationRules.publishAt), isNull(links.retiredAt)))
  return all.flatMap((station): EveningPlan[] => [
    { station, link: null, rule: station, since: station.createdAt },
    ...own.filter(({ rule }) => rule.stationId === station.id).map(({ rule, linkName }) => ({
      station, link: { id: rule.linkId, name: linkName }, rule: { zone: station.zone, publishAt: rule.publishAt! }, since: rule.createdAt,
    })),
  ])
}

/** Evening slots that are due and not done, oldest first. */
export async function findDueEvenings({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<DueEvening[]> {
  const plans = await listEveningPlans({ db })
  const done = await db.select({ entity: slots.entity, instant: slots.instant }).from(slots)
    .where(and(eq(slots.kind, 'publish-night'), gte(slots.instant, new Date(now.getTime() - lookBackMs)), countsAsDone(now)))
  const known = new Set(done.map(slot => `${slot.entity}:${slot.instant.getTime()}`))
  const due = plans.flatMap(plan => eveningInstants(plan.rule, Math.max(now.getTime() - lookBackMs, plan.since.getTime()), now.getTime() + 1)
    .filter(ms => !known.has(`${entityOf(plan)}:${ms}`))
    .map(ms => ({ ...plan, instant: new Date(ms) })))
  if (due.length === 0) return []
  const changed = await lastChanges({ db, now }, [...new Set(due.map(({ station }) => station.id))])
  return due.filter(({ station, instant }) => instant.getTime() >= (changed.get(station.id) ?? -Infinity))
    .sort((one, other) => one.instant.getTime() - other.instant.getTime())
}

/** When the time of day or the zone of a station was last changed: a new time owes nothing of the days before it. */
async function lastChanges({ db, now }: Pick<Deps, 'db' | 'now'>, stationIds: string[]): Promise<Map<string, number>> {
  const rows = await db.select({ stationId: audit.entityId, at: sql<string>`max(${audit.at})` }).from(audit)
    .where(and(eq(audit.entityKind, 'station'), inArray(audit.entityId, stationIds), eq(audit.action, 'station.change'), lte(audit.at, now), sql`${audit.after} ?| array['publishAt', 'zone']`))
    .groupBy(audit.entityId)
  return new Map(rows.map(({ stationId, at }) => [stationId, new Date(at).getTime()]))
}
