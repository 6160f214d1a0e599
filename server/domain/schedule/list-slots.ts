import { desc, sql } from 'drizzle-orm'
import type { z } from 'zod'
import { eveningInstants } from '#shared/publication-slots'
import type { ComingSlot, slotsOut } from '#shared/schemas/settings'
import { formatLocalTime } from '#shared/utils/format'
import { slots } from '~~/server/database/schema'
import type { Deps } from '../context'
import { at, comingTables, leadSlot } from '../alerts/coming-tables'
import { readSettings } from '../settings/read-settings'
import { comingEvenings } from './coming-evenings'
import { entityOf, listEveningPlans } from './evenings'
import { nameSlots, tableName } from './name-slots'
import { leadNotDone } from './slot'

type Slots = z.infer<typeof slotsOut>

const aheadMs = 48 * 3600_000
const hourMs = 3600_000
const mostDone = 200

/** What the schedule will do in the next two days, in order, and what it did last. */
export async function listSlots(deps: Pick<Deps, 'db' | 'now'>): Promise<Slots> {
  const coming = [...await stationEvenings(deps), ...await ownSlots(deps), ...await comingLeads(deps)].sort((one, other) => one.at < other.at ? -1 : one.at > other.at ? 1 : 0)
  return { coming, done: await done(deps) }
}

async function stationEvenings(deps: Pick<Deps, 'db' | 'now'>): Promise<ComingSlot[]> {
  const plans = await listEveningPlans(deps)
  const names = await nameSlots(deps, plans.map(plan => ({ kind: 'publish-night', entity: entityOf(plan) })))
  return comingEvenings(deps, plans.map(plan => ({ stationId: plan.station.id, linkId: plan.link?.id ?? null, rule: plan.rule, entity: entityOf(plan), name: names({ kind: 'publish-night', entity: entityOf(plan) }) })), aheadMs)
}

/** Slots that publish nothing. */
async function ownSlots({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<ComingSlot[]> {
  const { digestZone, digestAt } = await readSettings(db)
  const from = now.getTime() + 1
  const nextHour = (Math.floor(now.getTime() / hourMs) + 1) * hourMs
  const slot = (kind: string, name: string, ms: number) => ({ kind, entity: 'all', name, at: new Date(ms).toISOString(), local: formatLocalTime(ms, digestZone), approved: null, undecided: null })
  return [
    ...eveningInstants({ zone: digestZone, publishAt: digestAt }, from, from + aheadMs).map(ms => slot('digest', 'Digest of the night', ms)),
    slot('roll-forward', 'All predictions', nextHour),
  ]
}

async function comingLeads({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<ComingSlot[]> {
  const { rows } = await db.execute<{ entity: string, name: string, due: string, zone: string, ready: boolean, state: string }>(sql`
    SELECT t.id AS entity, ${tableName} AS name, ${leadSlot} AS due, st.zone, r.state, r.state = 'approved' AND (r.verdict <> 'breaks' OR r.seconded_by IS NOT NULL) AS ready
    FROM ${comingTables}
    JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('drafted','approved','held')
    WHERE p.gone_at IS NULL AND p.aos > ${at(now)}
      AND ${leadSlot} > ${at(now)} AND ${leadSlot} <= ${at(new Date(now.getTime() + aheadMs))}
      AND ${leadNotDone(now)}`)
  return rows.map((row) => {
    const due = new Date(row.due)
    return { kind: 'publish-lead', entity: row.entity, name: row.name, at: due.toISOString(), local: formatLocalTime(due.getTime(), row.zone), approved: Number(row.ready), undecided: Number(!row.ready && row.state !== 'held') }
  })
}

async function done(deps: Pick<Deps, 'db'>): Promise<Slots['done']> {
  const rows = await deps.db.select().from(slots).orderBy(desc(slots.doneAt), desc(slots.instant)).limit(mostDone)
  const names = await nameSlots(deps, rows)
  return rows.map(({ kind, entity, instant, doneAt, outcome }) => ({ kind, entity, name: names({ kind, entity }), at: instant.toISOString(), doneAt: doneAt.toISOString(), outcome }))
}
