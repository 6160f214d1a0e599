import { and, desc, eq, gt, isNotNull, isNull, lt, or, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { QuietSpanOut, quietSpansQuery } from '#shared/schemas/quiet-spans'
import { links, quietSpans, spacecraft, stations } from '~~/server/database/schema'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'

const select = (db: Deps['db']) => db.select({ span: quietSpans, stationName: stations.name, spacecraftName: spacecraft.name, linkName: links.name, linkSpacecraftId: links.spacecraftId }).from(quietSpans)
  .leftJoin(stations, eq(stations.id, quietSpans.stationId))
  .leftJoin(links, eq(links.id, quietSpans.linkId))
  // A link's spacecraft is named with it.
  .leftJoin(spacecraft, eq(spacecraft.id, sql`coalesce(${quietSpans.spacecraftId}, ${links.spacecraftId})`))
  .$dynamic()

function toOut({ span, stationName, spacecraftName, linkName }: Awaited<ReturnType<typeof select>>[number]): QuietSpanOut {
  const { startsAt, endsAt, createdAt, cancelledAt, ...plain } = span
  return { ...plain, stationName, spacecraftName, linkName, startsAt: startsAt.toISOString(), endsAt: endsAt.toISOString(), createdAt: createdAt.toISOString(), cancelledAt: cancelledAt?.toISOString() ?? null }
}

/** Quiet spans, the latest first; of a station, a spacecraft or a link, those that concern it. */
export async function listQuietSpans({ db }: Pick<Deps, 'db'>, query: z.output<typeof quietSpansQuery>): Promise<{ items: QuietSpanOut[], nextCursor: string | null }> {
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const { stationId, spacecraftId, linkId, from, to, state } = query
  const rows = await select(db)
    .where(and(
      stationId ? or(isNull(quietSpans.stationId), eq(quietSpans.stationId, stationId)) : undefined,
      spacecraftId ? sql`(coalesce(${quietSpans.spacecraftId}, ${links.spacecraftId}) IS NULL OR coalesce(${quietSpans.spacecraftId}, ${links.spacecraftId}) = ${spacecraftId})` : undefined,
      linkId ? or(eq(quietSpans.linkId, linkId), sql`${quietSpans.linkId} IS NULL AND (${quietSpans.spacecraftId} IS NULL OR ${quietSpans.spacecraftId} = (SELECT own.spacecraft_id FROM links AS own WHERE own.id = ${linkId}))`) : undefined,
      from ? gt(quietSpans.endsAt, new Date(from)) : undefined,
      to ? lt(quietSpans.startsAt, new Date(to)) : undefined,
      state === 'standing' ? isNull(quietSpans.cancelledAt) : state === 'cancelled' ? isNotNull(quietSpans.cancelledAt) : undefined,
      after ? sql`(${quietSpans.startsAt}, ${quietSpans.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined,
    ))
    .orderBy(desc(quietSpans.startsAt), desc(quietSpans.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ span }) => [span.startsAt.toISOString(), span.id])
  return { items: page.rows.map(toOut), nextCursor: page.nextCursor }
}

export async function getQuietSpan({ db }: Pick<Deps, 'db'>, id: string): Promise<QuietSpanOut> {
  const [row] = await select(db).where(eq(quietSpans.id, id))
  return toOut(requireFound(row, 'quiet span'))
}
