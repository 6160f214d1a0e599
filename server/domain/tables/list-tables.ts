import { and, asc, eq, sql } from 'drizzle-orm'
import type { z } from 'zod'
import type { TableBrief, tablesQuery } from '#shared/schemas/tables'
import { passes, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'
import { passConditions, passKey } from './pass-filter'
import { briefOf, selectBriefs } from './table-brief'

/** Tuning tables by AOS. State and verdict are those of the newest revision. */
export async function listTables({ db, now }: Pick<Deps, 'db' | 'now'>, query: z.output<typeof tablesQuery>): Promise<{ items: TableBrief[], nextCursor: string | null }> {
  const after = readCursor(query.cursor, passKey)
  const rows = await selectBriefs(db)
    .where(and(
      passConditions(query),
      query.state && eq(tableRevisions.state, query.state),
      query.verdict && eq(tableRevisions.verdict, query.verdict),
      after ? sql`(${passes.aos}, ${tables.id}) > (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined,
    ))
    .orderBy(asc(passes.aos), asc(tables.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.aos.toISOString(), row.id])
  return { items: page.rows.map(row => briefOf(row, now)), nextCursor: page.nextCursor }
}
