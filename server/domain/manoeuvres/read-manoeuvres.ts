import { desc, eq, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { ManoeuvreOut } from '#shared/schemas/manoeuvres'
import { elementSets, manoeuvres, spacecraft } from '~~/server/database/schema'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'

const select = (db: Deps['db']) => db.select({
  row: manoeuvres,
  widens: sql<boolean>`coalesce(${manoeuvres.cancelledAt} IS NULL AND ${elementSets.epoch} <= ${manoeuvres.endsAt}, false)`,
}).from(manoeuvres).innerJoin(spacecraft, eq(spacecraft.id, manoeuvres.spacecraftId)).leftJoin(elementSets, eq(elementSets.id, spacecraft.inUseSetId)).$dynamic()

function toOut({ row, widens }: Awaited<ReturnType<typeof select>>[number]): ManoeuvreOut {
  const { id, spacecraftId, speedSigmaMps, note, enteredBy, cancelledBy } = row
  return {
    id, spacecraftId, startsAt: row.startsAt.toISOString(), endsAt: row.endsAt.toISOString(), speedSigmaMps, note,
    enteredBy, createdAt: row.createdAt.toISOString(), cancelledAt: row.cancelledAt?.toISOString() ?? null, cancelledBy, widens,
  }
}

/** Manoeuvres of a spacecraft, the latest start first, cancelled ones too. */
export async function listManoeuvres({ db }: Pick<Deps, 'db'>, spacecraftId: string, query: { limit: number, cursor?: string }) {
  const [craft] = await db.select({ id: spacecraft.id }).from(spacecraft).where(eq(spacecraft.id, spacecraftId))
  requireFound(craft, 'spacecraft')
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await select(db)
    .where(sql`${manoeuvres.spacecraftId} = ${spacecraftId}${after ? sql` AND (${manoeuvres.startsAt}, ${manoeuvres.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : sql``}`)
    .orderBy(desc(manoeuvres.startsAt), desc(manoeuvres.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ row }) => [row.startsAt.toISOString(), row.id])
  return { items: page.rows.map(toOut), nextCursor: page.nextCursor }
}

export async function getManoeuvre({ db }: Pick<Deps, 'db'>, id: string): Promise<ManoeuvreOut> {
  const [row] = await select(db).where(eq(manoeuvres.id, id))
  return toOut(requireFound(row, 'manoeuvre'))
}
