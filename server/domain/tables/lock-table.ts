import { asc, eq } from 'drizzle-orm'
import { openStates, outStates } from '#shared/table-life'
import { links, passes, spacecraft, stations, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import { DomainError } from '../errors'

export type RevisionRow = typeof tableRevisions.$inferSelect

export interface LockedTable {
  readonly id: string
  readonly pass: typeof passes.$inferSelect
  readonly link: typeof links.$inferSelect
  readonly station: typeof stations.$inferSelect
  readonly craft: typeof spacecraft.$inferSelect
  /** Drafted, approved or held. */
  readonly open: RevisionRow | null
  /** What the station gets. */
  readonly out: RevisionRow | null
  readonly newest: RevisionRow
}

/** A table as it stands, locked until the end of the transaction: decisions on one table come one after the other. */
export async function lockTable({ db }: Pick<Deps, 'db'>, id: string): Promise<LockedTable> {
  await db.select({ id: tables.id }).from(tables).where(eq(tables.id, id)).for('update')
  const [row] = await db.select({ pass: passes, link: links, station: stations, craft: spacecraft }).from(tables)
    .innerJoin(passes, eq(passes.id, tables.passId))
    .innerJoin(links, eq(links.id, tables.linkId))
    .innerJoin(stations, eq(stations.id, passes.stationId))
    .innerJoin(spacecraft, eq(spacecraft.id, passes.spacecraftId))
    .where(eq(tables.id, id))
  const revisions = await db.select().from(tableRevisions).where(eq(tableRevisions.tableId, id)).orderBy(asc(tableRevisions.number))
  const newest = revisions.at(-1)
  if (!row || !newest) throw new DomainError('not-found', 'There is no tuning table under this address.')
  return {
    id,
    ...row,
    open: revisions.find(({ state }) => openStates.includes(state)) ?? null,
    out: revisions.find(({ state }) => outStates.includes(state)) ?? null,
    newest,
  }
}
