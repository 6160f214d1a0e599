import { and, eq } from 'drizzle-orm'
import { tableRevisions } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import type { FeedTable } from './read-feed-table'

/** The station's controller has this exact revision. Said once; a newer revision that came meanwhile is not touched. */
export async function collectTable(given: Deps, { revisionId, tableId, revision }: Pick<FeedTable, 'revisionId' | 'tableId' | 'revision'>): Promise<void> {
  await given.db.transaction(async (tx) => {
    const collected = await tx.update(tableRevisions).set({ state: 'collected', collectedAt: given.now, updatedAt: given.now })
      .where(and(eq(tableRevisions.id, revisionId), eq(tableRevisions.state, 'published'))).returning({ id: tableRevisions.id })
    if (collected.length === 0) return
    await recordAudit({ ...given, db: tx }, { action: 'table.collect', entityKind: 'table-revision', entityId: revisionId, tableId, before: { state: 'published' }, after: { revision, state: 'collected' } })
  })
}
