import { and, eq, isNull, sql } from 'drizzle-orm'
import { z } from 'zod'
import { allowanceOf } from '#shared/physics/link/allowance'
import type { LinkOut } from '#shared/schemas/links'
import { links, spacecraft } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'
import { requireFound } from './require-row'

const columns = { row: links, spacecraftName: spacecraft.name, sortSpacecraft: sql<string>`lower(${spacecraft.name})`, sortName: sql<string>`lower(${links.name})` }
const select = (db: Deps['db']) => db.select(columns).from(links).innerJoin(spacecraft, eq(spacecraft.id, links.spacecraftId)).$dynamic()

function toOut({ row, spacecraftName }: { row: typeof links.$inferSelect, spacecraftName: string }): LinkOut {
  const { createdAt: _, ...fields } = row
  const { allowanceHz, limitedBy, symbolTimeS } = allowanceOf(row)
  return { ...fields, spacecraftName, allowanceHz, limitedBy, symbolTimeS, retiredAt: row.retiredAt?.toISOString() ?? null }
}

/** Links in service, by spacecraft and name, each with what it bears. */
export async function listLinks({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string, spacecraftId?: string }) {
  const after = readCursor(query.cursor, z.tuple([z.string(), z.string(), z.uuid()]))
  const rows = await select(db)
    .where(and(
      isNull(links.retiredAt),
      query.spacecraftId === undefined ? undefined : eq(links.spacecraftId, query.spacecraftId),
      after ? sql`(lower(${spacecraft.name}), lower(${links.name}), ${links.id}) > (${after[0]}, ${after[1]}, ${after[2]}::uuid)` : undefined,
    ))
    .orderBy(columns.sortSpacecraft, columns.sortName, links.id).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ sortSpacecraft, sortName, row }) => [sortSpacecraft, sortName, row.id])
  return { items: page.rows.map(toOut), nextCursor: page.nextCursor }
}

export async function getLink({ db }: Pick<Deps, 'db'>, id: string): Promise<LinkOut> {
  const [row] = await select(db).where(eq(links.id, id))
  return toOut(requireFound(row, 'link'))
}
