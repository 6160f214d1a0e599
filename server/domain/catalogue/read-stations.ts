import { and, eq, inArray, isNull, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { AntennaOut, StationOut } from '#shared/schemas/stations'
import { antennas, stations } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'
import { radiosOf } from './read-radios'
import { requireFound } from './require-row'

type StationRow = typeof stations.$inferSelect
type AntennaRow = typeof antennas.$inferSelect
const sortName = sql<string>`lower(${stations.name})`

/** Stations in service, by name, with their antennas and radios. */
export async function listStations({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string }) {
  const after = readCursor(query.cursor, z.tuple([z.string(), z.uuid()]))
  const rows = await db.select({ row: stations, sortName }).from(stations)
    .where(and(isNull(stations.retiredAt), after ? sql`(lower(${stations.name}), ${stations.id}) > (${after[0]}, ${after[1]}::uuid)` : undefined))
    .orderBy(sortName, stations.id).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ sortName, row }) => [sortName, row.id])
  return { items: await withAntennas(db, page.rows.map(({ row }) => row)), nextCursor: page.nextCursor }
}

export async function getStation({ db }: Pick<Deps, 'db'>, id: string): Promise<StationOut> {
  const [row] = await db.select().from(stations).where(eq(stations.id, id))
  return (await withAntennas(db, [requireFound(row, 'station')]))[0]!
}

export async function getAntenna({ db }: Pick<Deps, 'db'>, id: string): Promise<AntennaOut> {
  const [row] = await db.select().from(antennas).where(eq(antennas.id, id))
  return (await withRadios(db, [requireFound(row, 'antenna')]))[0]!
}

async function withAntennas(db: Deps['db'], rows: readonly StationRow[]): Promise<StationOut[]> {
  if (rows.length === 0) return []
  const found = await db.select().from(antennas)
    .where(and(isNull(antennas.retiredAt), inArray(antennas.stationId, rows.map(row => row.id)))).orderBy(sql`lower(${antennas.name})`, antennas.id)
  const all = await withRadios(db, found)
  return rows.map(({ createdAt: _, ...row }) => ({
    ...row,
    retiredAt: row.retiredAt?.toISOString() ?? null,
    antennas: all.filter(antenna => antenna.stationId === row.id),
  }))
}

async function withRadios(db: Deps['db'], rows: readonly AntennaRow[]): Promise<AntennaOut[]> {
  const all = await radiosOf({ db }, rows.map(row => row.id))
  return rows.map(({ createdAt: _, ...row }) => ({
    ...row,
    retiredAt: row.retiredAt?.toISOString() ?? null,
    radios: all.filter(radio => radio.antennaId === row.id),
  }))
}
