import { and, eq, isNull, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { SpacecraftOut } from '#shared/schemas/spacecraft'
import { elementSets, links, spacecraft } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'
import { requireFound } from './require-row'

const columns = {
  row: spacecraft,
  sortName: sql<string>`lower(${spacecraft.name})`,
  inUseEpoch: elementSets.epoch,
  waitingSets: sql<number>`(SELECT count(*)::int FROM element_sets AS held WHERE held.spacecraft_id = ${spacecraft.id} AND held.state = 'waiting')`,
  linkCount: sql<number>`(SELECT count(*)::int FROM ${links} WHERE ${links.spacecraftId} = ${spacecraft.id} AND ${links.retiredAt} IS NULL)`,
}
const select = (db: Deps['db']) => db.select(columns).from(spacecraft).leftJoin(elementSets, eq(elementSets.id, spacecraft.inUseSetId)).$dynamic()
type Row = Awaited<ReturnType<typeof select>>[number]

function toOut({ row, inUseEpoch, waitingSets, linkCount }: Row, now: Date): SpacecraftOut {
  const { createdAt: _, ...fields } = row
  return {
    ...fields,
    inUseEpoch: inUseEpoch?.toISOString() ?? null,
    elementAgeHours: inUseEpoch ? (now.getTime() - inUseEpoch.getTime()) / 3600_000 : null,
    waitingSets,
    linkCount,
    retiredAt: row.retiredAt?.toISOString() ?? null,
  }
}

/** Spacecraft that fly, by name. */
export async function listSpacecraft({ db, now }: Pick<Deps, 'db' | 'now'>, query: { limit: number, cursor?: string }) {
  const after = readCursor(query.cursor, z.tuple([z.string(), z.uuid()]))
  const rows = await select(db)
    .where(and(isNull(spacecraft.retiredAt), after ? sql`(lower(${spacecraft.name}), ${spacecraft.id}) > (${after[0]}, ${after[1]}::uuid)` : undefined))
    .orderBy(columns.sortName, spacecraft.id).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ sortName, row }) => [sortName, row.id])
  return { items: page.rows.map(row => toOut(row, now)), nextCursor: page.nextCursor }
}

export async function getSpacecraft({ db, now }: Pick<Deps, 'db' | 'now'>, id: string): Promise<SpacecraftOut> {
  const [row] = await select(db).where(eq(spacecraft.id, id))
  return toOut(requireFound(row, 'spacecraft'), now)
}
