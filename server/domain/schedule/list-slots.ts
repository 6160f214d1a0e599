import { desc, inArray, isNull, sql } from 'drizzle-orm'
import type { z } from 'zod'
import { eveningInstants } from '#shared/publication-slots'
import type { slotsOut } from '#shared/schemas/settings'
import { formatLocalTime } from '#shared/utils/format'
import { slots, stations } from '~~/server/database/schema'
import type { Deps } from '../context'
import { at, comingTables } from '../alerts/coming-tables'
import { readSettings } from '../settings/read-settings'

type Slots = z.infer<typeof slotsOut>
type Coming = Slots['coming'][number]

const aheadMs = 48 * 3600_000
const hourMs = 3600_000
const mostDone = 200

/** What the schedule will do in the next two days, in order, and what it did last. */
export async function listSlots(deps: Pick<Deps, 'db' | 'now'>): Promise<Slots> {
  const coming = [...await comingEvenings(deps), ...await comingLeads(deps)].sort((one, other) => one.at < other.at ? -1 : one.at > other.at ? 1 : 0)
  return { coming, done: await done(deps) }
}

async function comingEvenings({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<Coming[]> {
  const { digestZone, digestAt } = await readSettings(db)
  const from = now.getTime() + 1
  const evenings = (rule: { zone: string, publishAt: string }, slot: { kind: string, entity: string, name: string }) =>
    eveningInstants(rule, from, from + aheadMs).map(ms => ({ ...slot, at: new Date(ms).toISOString(), local: formatLocalTime(ms, rule.zone) }))
  const all = await db.select().from(stations).where(isNull(stations.retiredAt))
  const nextHour = (Math.floor(now.getTime() / hourMs) + 1) * hourMs
  return [
    ...all.flatMap(station => evenings(station, { kind: 'publish-night', entity: station.id, name: station.name })),
    ...evenings({ zone: digestZone, publishAt: digestAt }, { kind: 'digest', entity: 'all', name: 'Digest of the night' }),
    { kind: 'roll-forward', entity: 'all', name: 'All predictions', at: new Date(nextHour).toISOString(), local: formatLocalTime(nextHour, digestZone) },
  ]
}

const tableName = sql`sc.name || ' at ' || st.name || ', ' || l.name`

async function comingLeads({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<Coming[]> {
  const { rows } = await db.execute<{ entity: string, name: string, due: string, zone: string }>(sql`
    SELECT t.id AS entity, ${tableName} AS name, p.aos - make_interval(mins => st.publish_lead_minutes) AS due, st.zone
    FROM ${comingTables}
    JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('drafted','approved','held')
    WHERE p.gone_at IS NULL AND p.aos > ${at(now)}
      AND p.aos - make_interval(mins => st.publish_lead_minutes) > ${at(now)} AND p.aos - make_interval(mins => st.publish_lead_minutes) <= ${at(new Date(now.getTime() + aheadMs))}
      AND NOT EXISTS (SELECT 1 FROM slots s WHERE s.kind = 'publish-lead' AND s.entity = t.id::text)`)
  return rows.map((row) => {
    const due = new Date(row.due)
    return { kind: 'publish-lead', entity: row.entity, name: row.name, at: due.toISOString(), local: formatLocalTime(due.getTime(), row.zone) }
  })
}

async function done({ db }: Pick<Deps, 'db'>): Promise<Slots['done']> {
  const rows = await db.select().from(slots).orderBy(desc(slots.doneAt), desc(slots.instant)).limit(mostDone)
  const stationIds = rows.filter(({ kind }) => kind === 'publish-night').map(({ entity }) => entity)
  const tableIds = rows.filter(({ kind }) => kind === 'publish-lead').map(({ entity }) => entity)
  const names = new Map([['digest:all', 'Digest of the night'], ['roll-forward:all', 'All predictions']])
  if (stationIds.length > 0) for (const { id, name } of await db.select({ id: stations.id, name: stations.name }).from(stations).where(inArray(stations.id, stationIds))) names.set(`publish-night:${id}`, name)
  if (tableIds.length > 0) {
    const named = await db.execute<{ id: string, name: string }>(sql`
      SELECT t.id, ${tableName} AS name FROM tables t JOIN passes p ON p.id = t.pass_id JOIN links l ON l.id = t.link_id
      JOIN spacecraft sc ON sc.id = p.spacecraft_id JOIN stations st ON st.id = p.station_id
      WHERE t.id::text IN (SELECT jsonb_array_elements_text(${JSON.stringify(tableIds)}::jsonb))`)
    for (const { id, name } of named.rows) names.set(`publish-lead:${id}`, name)
  }
  return rows.map(({ kind, entity, instant, doneAt, outcome }) => ({ kind, entity, name: names.get(`${kind}:${entity}`) ?? 'Since removed', at: instant.toISOString(), doneAt: doneAt.toISOString(), outcome }))
}
