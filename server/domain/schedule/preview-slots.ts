import { and, eq, sql } from 'drizzle-orm'
import type { z } from 'zod'
import { eveningBefore, timesOf } from '#shared/publication-slots'
import type { ComingSlot, PreviewSlots, previewSlotsQuery } from '#shared/schemas/settings'
import { formatLocalTime } from '#shared/utils/format'
import { links, publicationRules, spacecraft, stations } from '~~/server/database/schema'
import { at } from '../alerts/coming-tables'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { comingEvenings } from './coming-evenings'

const aheadMs = 7 * 24 * 3600_000
const mostLeads = 300

/** The coming slots as they would be with these times, and what each would publish now; nothing is kept. Times left out stay as they are. */
export async function previewSlots(deps: Pick<Deps, 'db' | 'now'>, { stationId, linkId: ofLink, zone, publishAt, leadMinutes }: z.output<typeof previewSlotsQuery>): Promise<PreviewSlots> {
  const { db } = deps
  const linkId = ofLink ?? null
  const [stored] = await db.select().from(stations).where(eq(stations.id, stationId))
  const station = { ...requireFound(stored, 'station'), ...(zone ? { zone } : {}) }
  const [link] = linkId ? await db.select({ name: links.name, spacecraftName: spacecraft.name }).from(links).innerJoin(spacecraft, eq(spacecraft.id, links.spacecraftId)).where(eq(links.id, linkId)) : []
  const name = linkId ? `${requireFound(link, 'link').spacecraftName}, ${link!.name} at ${station.name}` : station.name
  const [own = null] = linkId ? await db.select().from(publicationRules).where(and(eq(publicationRules.stationId, stationId), eq(publicationRules.linkId, linkId))) : []
  const standing = timesOf(station, own)
  const times = { zone: station.zone, publishAt: publishAt ?? standing.publishAt, leadMinutes: leadMinutes ?? standing.leadMinutes }
  const evenings = await comingEvenings(deps, [{ stationId, linkId, rule: times, entity: linkId ? `${stationId}:${linkId}` : stationId, name }], aheadMs)
  return { evenings, ...await leadsOf(deps, { stationId, linkId, times }) }
}

interface Row extends Record<string, unknown> { pass_id: string, spacecraft: string, aos: string, ready: number, undecided: number }

/** Before each pass: what is approved too late for its evening, and what waits for a decision. */
async function leadsOf({ db, now }: Pick<Deps, 'db' | 'now'>, { stationId, linkId, times }: { stationId: string, linkId: string | null, times: ReturnType<typeof timesOf> }): Promise<Pick<PreviewSlots, 'leads' | 'leadCount'>> {
  const leadMs = times.leadMinutes * 60_000
  const { rows } = await db.execute<Row>(sql`
    SELECT p.id AS pass_id, sc.name AS spacecraft, p.aos,
      count(*) FILTER (WHERE r.state = 'approved' AND (r.verdict <> 'breaks' OR r.seconded_by IS NOT NULL))::int AS ready,
      count(*) FILTER (WHERE r.state = 'drafted' OR r.state = 'approved' AND r.verdict = 'breaks' AND r.seconded_by IS NULL)::int AS undecided
    FROM passes p JOIN spacecraft sc ON sc.id = p.spacecraft_id JOIN tables t ON t.pass_id = p.id
    JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('drafted','approved')
    WHERE p.station_id = ${stationId} AND p.gone_at IS NULL AND p.aos > ${at(new Date(now.getTime() + leadMs))} AND p.aos <= ${at(new Date(now.getTime() + leadMs + aheadMs))}
      AND ${linkId ? sql`t.link_id = ${linkId}` : sql`NOT EXISTS (SELECT 1 FROM publication_rules own WHERE own.station_id = p.station_id AND own.link_id = t.link_id AND own.lead_minutes IS NOT NULL)`}
    GROUP BY p.id, sc.name, p.aos ORDER BY p.aos, p.id`)
  const leads = rows.map((row): ComingSlot => {
    const aosMs = Date.parse(row.aos)
    const ms = aosMs - leadMs
    const goesAtEvening = eveningBefore(times, aosMs) > now.getTime() && eveningBefore(times, aosMs) <= ms
    return { kind: 'publish-lead', entity: row.pass_id, name: row.spacecraft, at: new Date(ms).toISOString(), local: formatLocalTime(ms, times.zone), approved: goesAtEvening ? 0 : row.ready, undecided: row.undecided }
  })
  return { leads: leads.slice(0, mostLeads), leadCount: leads.length }
}
