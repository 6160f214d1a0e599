import { and, eq, inArray, isNull, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { RadioOut } from '#shared/schemas/stations'
import { antennas, radios, stations } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'
import { requireFound } from './require-row'

const columns = { row: radios, antennaName: antennas.name, stationId: stations.id, stationName: stations.name, sortName: sql<string>`lower(${radios.name})` }
const select = (db: Deps['db']) => db.select(columns).from(radios)
  .innerJoin(antennas, eq(antennas.id, radios.antennaId)).innerJoin(stations, eq(stations.id, antennas.stationId)).$dynamic()
type Row = Awaited<ReturnType<typeof select>>[number]

function toOut({ row, antennaName, stationId, stationName }: Row): RadioOut {
  const { createdAt: _, ...fields } = row
  return { ...fields, antennaName, stationId, stationName, retiredAt: row.retiredAt?.toISOString() ?? null }
}

/** Radios in service, by name. */
export async function listRadios({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string }) {
  const after = readCursor(query.cursor, z.tuple([z.string(), z.uuid()]))
  const rows = await select(db)
    .where(and(isNull(radios.retiredAt), after ? sql`(lower(${radios.name}), ${radios.id}) > (${after[0]}, ${after[1]}::uuid)` : undefined))
    .orderBy(columns.sortName, radios.id).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ sortName, row }) => [sortName, row.id])
  return { items: page.rows.map(toOut), nextCursor: page.nextCursor }
}

/** Radios in service of some antennas, by name. */
export async function radiosOf({ db }: Pick<Deps, 'db'>, antennaIds: readonly string[]): Promise<RadioOut[]> {
  if (antennaIds.length === 0) return []
  return (await select(db).where(and(isNull(radios.retiredAt), inArray(radios.antennaId, [...antennaIds]))).orderBy(columns.sortName, radios.id)).map(toOut)
}

export async function getRadio({ db }: Pick<Deps, 'db'>, id: string): Promise<RadioOut> {
  const [row] = await select(db).where(eq(radios.id, id))
  return toOut(requireFound(row, 'radio'))
}
