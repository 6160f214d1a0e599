import { and, eq, inArray, sql } from 'drizzle-orm'
import { formatHz, formatUtc } from '#shared/utils/format'
import { passes, links, spacecraft, stations, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import type { PredictionOutcome } from '../prediction/recheck-outcome'
import type { Cause, CauseScope } from './cause'
import { at, comingTables } from './coming-tables'
import { standing } from './publication-failed'

const causeOf = (spacecraftId: string, setId: string | null) => `published-table-breaks:${spacecraftId}:${setId ?? 'none'}`

/** The tables that a station has and that no longer stand up to what is predicted now; null when there are none. */
export async function publishedTableBreaks({ db }: Pick<Deps, 'db'>, outcome: PredictionOutcome): Promise<Cause | null> {
  const suspects = outcome.rechecks.filter(recheck => recheck.verdict === 'breaks' || recheck.gone !== null)
  if (suspects.length === 0) return null
  const rows = await db.select({ tableId: tables.id, aos: passes.aos, link: links.name, verdict: tableRevisions.verdict, spacecraft: spacecraft.name, setId: spacecraft.inUseSetId, station: stations.name })
    .from(tables)
    .innerJoin(tableRevisions, and(eq(tableRevisions.tableId, tables.id), inArray(tableRevisions.state, ['published', 'collected'])))
    .innerJoin(passes, eq(passes.id, tables.passId))
    .innerJoin(links, eq(links.id, tables.linkId))
    .innerJoin(spacecraft, eq(spacecraft.id, passes.spacecraftId))
    .innerJoin(stations, eq(stations.id, passes.stationId))
    .where(inArray(tables.id, suspects.map(({ tableId }) => tableId)))
    .orderBy(passes.aos)
  // What went out although it broke was somebody's decision: a new set does not make it news.
  const news = rows.flatMap((row) => {
    const recheck = suspects.find(({ tableId }) => tableId === row.tableId)!
    return recheck.gone !== null || row.verdict !== 'breaks' ? [{ ...row, recheck }] : []
  })
  const first = news[0]
  if (!first) return null
  const worst = news.filter(({ recheck }) => recheck.verdict === 'breaks').sort((a, b) => ratio(b.recheck) - ratio(a.recheck))[0]
  const gone = news.filter(({ recheck }) => recheck.gone !== null)
  return {
    kind: 'published-table-breaks',
    cause: causeOf(outcome.spacecraftId, first.setId),
    severity: 'call',
    title: `${first.spacecraft}: what ${first.station} has been given no longer holds`,
    detail: [
      `Since ${outcome.reason} ${news.length === 1 ? 'one published table does' : `${news.length} published tables do`} not stand any more, the first with AOS ${formatUtc(first.aos.getTime(), 'second')}.`,
      worst ? `Worst: ${worst.link}, ${formatHz(worst.recheck.worstResidualHz)} Hz budgeted residual; it bears ${formatHz(worst.recheck.allowanceHz)} Hz.` : '',
      gone.length > 0 ? `${gone.length === 1 ? 'One is' : `${gone.length} are`} for a pass or link that is no longer there: ${gone[0]!.recheck.gone}` : '',
    ].filter(Boolean).join(' '),
    action: 'Open the tables: approve and publish their newer revisions, withdraw those of passes that are gone, or roll the element set back if it is the one that is wrong.',
    spacecraftId: outcome.spacecraftId,
    stationId: outcome.stationId,
    tableId: first.tableId,
    dueAt: first.aos,
    count: news.length,
    weight: worst ? ratio(worst.recheck) : 1,
    raises: true,
  }
}

const ratio = (recheck: { worstResidualHz: number | null, allowanceHz: number | null }) => recheck.worstResidualHz !== null && recheck.allowanceHz ? recheck.worstResidualHz / recheck.allowanceHz : 1

/**
 * Such an alert stands while a table that is out waits for its newer revision, or is for a pass that is gone, and the
 * same set is in use.
 */
export async function findPublishedTableBreaks({ db, now }: Pick<Deps, 'db' | 'now'>, scope: CauseScope = {}): Promise<Cause[]> {
  const { rows } = await db.execute<{ spacecraft_id: string, set_id: string | null, tables: number }>(sql`
    SELECT p.spacecraft_id, sc.in_use_set_id AS set_id, count(DISTINCT t.id)::int AS tables
    FROM ${comingTables}
    JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('published','collected')
    LEFT JOIN table_revisions newer ON newer.table_id = t.id AND newer.state IN ('drafted','approved','held')
    WHERE p.los > ${at(now)} AND (p.gone_at IS NOT NULL OR newer.id IS NOT NULL)
      ${scope.spacecraftId ? sql`AND p.spacecraft_id = ${scope.spacecraftId}` : sql``}
    GROUP BY p.spacecraft_id, sc.in_use_set_id`)
  return rows.map(row => standing('published-table-breaks', causeOf(row.spacecraft_id, row.set_id), row.tables))
}
