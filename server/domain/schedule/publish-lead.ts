import { sql } from 'drizzle-orm'
import type { Deps } from '../context'
import { at, comingTables, leadSlot } from '../alerts/coming-tables'
import type { DueTable } from './publish-approved'
import { describePublished, publishApproved } from './publish-approved'
import type { Slot } from './slot'
import { claimSlot, finishSlot, lateness, leadNotDone, releaseSlot } from './slot'

export interface DueLead extends DueTable { instant: Date, state: 'drafted' | 'approved' | 'held' }

interface Row extends Record<string, unknown> { table_id: string, spacecraft_id: string, spacecraft: string, station_id: string, station: string, link: string, aos: string, due: string, state: DueLead['state'] }

/** Tables that are not out in their newest revision and whose last slot before AOS has come; a table has one, whatever AOS moves by. */
export async function findDueLeads({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<DueLead[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT t.id AS table_id, p.spacecraft_id, sc.name AS spacecraft, p.station_id, st.name AS station, l.name AS link, p.aos, r.state,
      ${leadSlot} AS due
    FROM ${comingTables}
    JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('drafted','approved','held')
    WHERE p.gone_at IS NULL AND p.aos > ${at(now)} AND p.aos <= ${at(new Date(now.getTime() + 24 * 3600_000))}
      AND ${leadSlot} <= ${at(now)}
      AND p.aos - make_interval(mins => st.freeze_minutes) > ${at(now)}
      AND ${leadNotDone(now)}
    ORDER BY p.aos, t.id`)
  return rows.map(row => ({
    tableId: row.table_id, spacecraftId: row.spacecraft_id, spacecraftName: row.spacecraft, stationId: row.station_id, stationName: row.station,
    linkName: row.link, aos: new Date(row.aos), instant: new Date(row.due), state: row.state,
  }))
}

/** The slot before a pass: what is approved goes out. */
export async function publishLead(given: Deps, lead: DueLead): Promise<void> {
  const slot: Slot = { kind: 'publish-lead', entity: lead.tableId, instant: lead.instant }
  await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    if (!await claimSlot(deps, slot)) return
    if (lead.state !== 'approved') return finishSlot(deps, slot, `Not published: ${lead.state}, ${lateness(lead.instant, deps.now)}.`)
    const done = await publishApproved(deps, [lead])
    // Being computed anew: the next wake tries again, until the station's freeze.
    if (done.refused.stale) return releaseSlot(deps, slot)
    await finishSlot(deps, slot, `${describePublished(done)}, ${lateness(lead.instant, deps.now)}.`)
  })
}
