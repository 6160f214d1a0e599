import { and, desc, eq, isNotNull } from 'drizzle-orm'
import type { ServedTable } from '#shared/formats/published-table'
import { tableCsv } from '#shared/formats/table-csv'
import { tableTdm } from '#shared/formats/table-tdm'
import { passes, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import type { Notation } from './notation'

export interface FeedTable { revisionId: string, tableId: string, revision: number, isCollected: boolean, digest: string, signature: string }

/** The newest published revision of one of the station's own tables, however long ago its pass was; without the table itself, which most polls need not. */
export async function readFeedTable({ db }: Pick<Deps, 'db'>, { stationId, tableId }: { stationId: string, tableId: string }): Promise<FeedTable> {
  const { id, number, state, reason, digest, signature } = tableRevisions
  const [row] = await db.select({ revisionId: id, revision: number, state, reason, digest, signature }).from(tableRevisions)
    .innerJoin(tables, eq(tables.id, tableRevisions.tableId))
    .innerJoin(passes, eq(passes.id, tables.passId))
    .where(and(eq(tables.id, tableId), eq(passes.stationId, stationId), isNotNull(tableRevisions.publishedAt)))
    .orderBy(desc(tableRevisions.number)).limit(1)
  if (!row) throw new DomainError('not-found', 'Your station has been given no table under this address.')
  if (row.state === 'withdrawn') throw new DomainError('gone', `Revision ${row.revision} was withdrawn and must not be used. Reason: ${row.reason ?? 'none given'}`)
  return { revisionId: row.revisionId, tableId, revision: row.revision, isCollected: row.state !== 'published', digest: row.digest!, signature: row.signature! }
}

/**
 * What is sent: the canonical JSON as it was signed, with digest and signature added; or the same as CSV or CCSDS TDM. It
 * is that very revision's, whatever has been published since: what is published never changes.
 */
export async function writeFeedTable({ db }: Pick<Deps, 'db'>, { revisionId, digest, signature }: FeedTable, notation: Notation): Promise<string> {
  const [row] = await db.select({ canonical: tableRevisions.canonical }).from(tableRevisions).where(eq(tableRevisions.id, revisionId))
  if (!row) throw new DomainError('not-found', 'Your station has been given no table under this address.')
  const json = `${row.canonical!.slice(0, -1)},"digest":${JSON.stringify(digest)},"signature":${JSON.stringify(signature)}}`
  if (notation === 'json') return json
  const table = JSON.parse(json) as ServedTable
  return notation === 'csv' ? tableCsv(table) : tableTdm(table)
}
