import { and, asc, eq, inArray, sql } from 'drizzle-orm'
import type { z } from 'zod'
import type { PassOut, passesQuery } from '#shared/schemas/tables'
import { links, passes, spacecraft, stations, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'
import { DomainError } from '../errors'
import { passConditions, passKey } from './pass-filter'

const selectPasses = (db: Deps['db']) => db.select({ pass: passes, spacecraftName: spacecraft.name, stationName: stations.name, stationZone: stations.zone }).from(passes)
  .innerJoin(spacecraft, eq(spacecraft.id, passes.spacecraftId))
  .innerJoin(stations, eq(stations.id, passes.stationId))
  .$dynamic()
type PassRow = Awaited<ReturnType<typeof selectPasses>>[number]

/** Predicted passes by AOS, each with the newest revision of its tables. */
export async function listPasses({ db }: Pick<Deps, 'db'>, query: z.output<typeof passesQuery>): Promise<{ items: PassOut[], nextCursor: string | null }> {
  const after = readCursor(query.cursor, passKey)
  const rows = await selectPasses(db)
    .where(and(passConditions(query), after ? sql`(${passes.aos}, ${passes.id}) > (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined))
    .orderBy(asc(passes.aos), asc(passes.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ pass }) => [pass.aos.toISOString(), pass.id])
  return { items: await withTables({ db }, page.rows), nextCursor: page.nextCursor }
}

export async function getPass({ db }: Pick<Deps, 'db'>, id: string): Promise<PassOut> {
  const rows = await selectPasses(db).where(eq(passes.id, id))
  const [found] = await withTables({ db }, rows)
  if (!found) throw new DomainError('not-found', 'There is no pass under this address.')
  return found
}

async function withTables({ db }: Pick<Deps, 'db'>, rows: readonly PassRow[]): Promise<PassOut[]> {
  const own = rows.length === 0
    ? []
    : await db.select({
        passId: tables.passId, id: tables.id, linkId: links.id, linkName: links.name, direction: links.direction, state: tableRevisions.state, verdict: tableRevisions.verdict,
        margin: sql<number>`(${tableRevisions.check} ->> 'margin')::double precision`,
      }).from(tables)
        .innerJoin(links, eq(links.id, tables.linkId))
        .innerJoin(tableRevisions, and(eq(tableRevisions.tableId, tables.id), sql`${tableRevisions.number} = (SELECT max(other.number) FROM table_revisions AS other WHERE other.table_id = ${tables.id})`))
        .where(inArray(tables.passId, rows.map(({ pass }) => pass.id)))
        .orderBy(asc(links.direction), asc(links.name), asc(links.id))
  return rows.map(({ pass, ...names }) => ({
    id: pass.id,
    spacecraftId: pass.spacecraftId, stationId: pass.stationId, ...names,
    elementSetId: pass.elementSetId,
    aos: pass.aos.toISOString(), culmination: pass.culmination.toISOString(), los: pass.los.toISOString(), maxElevationDeg: pass.maxElevationDeg,
    goneAt: pass.goneAt?.toISOString() ?? null,
    tables: own.filter(({ passId }) => passId === pass.id).map(({ passId: _, ...table }) => table),
  }))
}
