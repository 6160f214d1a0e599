import { and, eq, isNotNull } from 'drizzle-orm'
import { passes, stationReports, tableRevisions, tables } from '~~/server/database/schema'
import { reconcileAlerts } from '../alerts/reconcile-alerts'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'

export interface TableReport { stationId: string, tableId: string, revision: number, outcome: 'loaded' | 'refused', reason?: string }

/** What a station did with a revision that it was given. A refusal raises its alert at once; a later "loaded" closes it. */
export async function reportTable(given: Deps, { stationId, tableId, revision, outcome, reason }: TableReport): Promise<void> {
  await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    const published = await tx.select({ id: tableRevisions.id, number: tableRevisions.number }).from(tableRevisions)
      .innerJoin(tables, eq(tables.id, tableRevisions.tableId))
      .innerJoin(passes, eq(passes.id, tables.passId))
      .where(and(eq(tables.id, tableId), eq(passes.stationId, stationId), isNotNull(tableRevisions.publishedAt)))
    if (published.length === 0) throw new DomainError('not-found', 'Your station has been given no table under this address.')
    const reported = published.find(({ number }) => number === revision)
    if (!reported) throw new DomainError('not-valid', `revision: ${revision} was never published; published: ${published.map(({ number }) => number).sort((a, b) => a - b).join(', ')}.`, [{ path: 'revision', message: 'Was never published.' }])
    await tx.insert(stationReports).values({ revisionId: reported.id, outcome, reason: reason ?? null, at: deps.now })
    await recordAudit(deps, { action: `table.${outcome}`, entityKind: 'table-revision', entityId: reported.id, tableId, reason: reason ?? null, after: { revision, outcome } })
    await reconcileAlerts(deps, { kinds: ['station-refused'], stationId })
  })
}
