import { and, eq, inArray, ne, sql } from 'drizzle-orm'
import { alias } from 'drizzle-orm/pg-core'
import { nextPublication, timesOf } from '#shared/publication-slots'
import type { TableBrief } from '#shared/schemas/tables'
import { openStates, outStates } from '#shared/table-life'
import { links, passes, publicationRules, spacecraft, stations, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import { DomainError } from '../errors'

const out = alias(tableRevisions, 'out_revision')
const figure = (name: string) => sql<number>`(${tableRevisions.check} ->> ${sql.raw(`'${name}'`)})::double precision`

const columns = {
  id: tables.id,
  passId: passes.id, aos: passes.aos, culmination: passes.culmination, los: passes.los, maxElevationDeg: passes.maxElevationDeg, goneAt: passes.goneAt,
  linkId: links.id, linkName: links.name, direction: links.direction, carrierHz: links.carrierHz,
  spacecraftId: spacecraft.id, spacecraftName: spacecraft.name,
  station: { id: stations.id, name: stations.name, zone: stations.zone, publishAt: stations.publishAt, publishLeadMinutes: stations.publishLeadMinutes },
  ownTimes: { publishAt: publicationRules.publishAt, leadMinutes: publicationRules.leadMinutes },
  revision: {
    number: tableRevisions.number, state: tableRevisions.state, verdict: tableRevisions.verdict, reason: tableRevisions.reason,
    approvedBy: tableRevisions.approvedBy, approvedById: tableRevisions.approvedById, secondedBy: tableRevisions.secondedBy,
    publishedAt: tableRevisions.publishedAt, collectedAt: tableRevisions.collectedAt, digest: tableRevisions.digest,
  },
  margin: figure('margin'),
  worstResidualHz: figure('worstResidualHz'),
  allowanceHz: figure('allowanceHz'),
  worstAt: sql<string>`${tableRevisions.check} ->> 'worstAt'`,
  retuneCount: sql<number>`jsonb_array_length(${tableRevisions.retunes})`,
  out: { number: out.number, state: out.state, publishedAt: out.publishedAt, collectedAt: out.collectedAt, verdict: out.verdict, digest: out.digest },
  report: sql<{ outcome: 'loaded' | 'refused', reason: string | null, at: string } | null>`(
    SELECT json_build_object('outcome', report.outcome, 'reason', report.reason, 'at', report.at) FROM station_reports AS report
    WHERE report.revision_id = coalesce(${out.id}, ${tableRevisions.id}) ORDER BY report.at DESC LIMIT 1)`,
}

/** Tables with their newest revision, and the one that the station gets where that is another. */
export const selectBriefs = (db: Deps['db']) => db.select(columns).from(tables)
  .innerJoin(passes, eq(passes.id, tables.passId))
  .innerJoin(links, eq(links.id, tables.linkId))
  .innerJoin(spacecraft, eq(spacecraft.id, passes.spacecraftId))
  .innerJoin(stations, eq(stations.id, passes.stationId))
  .innerJoin(tableRevisions, and(eq(tableRevisions.tableId, tables.id), sql`${tableRevisions.number} = (SELECT max(other.number) FROM table_revisions AS other WHERE other.table_id = ${tables.id})`))
  .leftJoin(publicationRules, and(eq(publicationRules.stationId, stations.id), eq(publicationRules.linkId, links.id)))
  .leftJoin(out, and(eq(out.tableId, tables.id), inArray(out.state, [...outStates]), ne(out.id, tableRevisions.id)))
  .$dynamic()
export type BriefRow = Awaited<ReturnType<typeof selectBriefs>>[number]

export function briefOf(row: BriefRow, now: Date): TableBrief {
  const { station, ownTimes: _, revision, out, report, goneAt, ...plain } = row
  return {
    ...plain,
    stationId: station.id, stationName: station.name, stationZone: station.zone,
    aos: row.aos.toISOString(), culmination: row.culmination.toISOString(), los: row.los.toISOString(),
    revision: revision.number,
    state: revision.state, verdict: revision.verdict, reason: revision.reason,
    approvedBy: revision.approvedBy, approvedById: revision.approvedById, secondedBy: revision.secondedBy,
    publishedAt: revision.publishedAt?.toISOString() ?? null, collectedAt: revision.collectedAt?.toISOString() ?? null, digest: revision.digest,
    out: out && { revision: out.number, state: out.state, publishedAt: out.publishedAt!.toISOString(), collectedAt: out.collectedAt?.toISOString() ?? null, verdict: out.verdict, digest: out.digest! },
    publishesAt: goneAt === null ? publishesAt(row, now) : null,
    stationReport: report && { ...report, at: new Date(report.at).toISOString() },
  }
}

function publishesAt({ station, ownTimes, revision, aos }: BriefRow, now: Date): string | null {
  if (!openStates.includes(revision.state) || aos <= now) return null
  const instant = nextPublication({ ...timesOf(station, ownTimes), aosMs: aos.getTime(), afterMs: now.getTime() })
  return instant === null ? null : new Date(instant).toISOString()
}

export async function getBrief({ db, now }: Pick<Deps, 'db' | 'now'>, id: string): Promise<TableBrief> {
  const [row] = await selectBriefs(db).where(eq(tables.id, id))
  if (!row) throw new DomainError('not-found', 'There is no tuning table under this address.')
  return briefOf(row, now)
}
