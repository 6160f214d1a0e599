import { createHash } from 'node:crypto'
import { and, asc, eq, gt, inArray, isNull, or } from 'drizzle-orm'
import type { Span } from '#shared/physics/types'
import { quietSpans } from '~~/server/database/schema'
import type { Deps } from '../context'
import type { PassTimes } from './quiet-during'
import { quietDuring } from './quiet-during'

/** A pass that began this long ago is still looked at. */
const PAST_MS = 3_600_000

/** Spans in which no retune of these links at this station may take effect, by link. What a span names must all match. */
export async function loadQuiet({ db, now }: Pick<Deps, 'db' | 'now'>, { stationId, spacecraftId, linkIds }: { stationId: string, spacecraftId: string, linkIds: readonly string[] }): Promise<Map<string, Span[]>> {
  if (linkIds.length === 0) return new Map()
  const rows = await db.select().from(quietSpans).where(and(
    isNull(quietSpans.cancelledAt), gt(quietSpans.endsAt, new Date(now.getTime() - PAST_MS)),
    or(isNull(quietSpans.stationId), eq(quietSpans.stationId, stationId)),
    or(isNull(quietSpans.spacecraftId), eq(quietSpans.spacecraftId, spacecraftId)),
    or(isNull(quietSpans.linkId), inArray(quietSpans.linkId, [...linkIds])),
  )).orderBy(asc(quietSpans.startsAt), asc(quietSpans.endsAt), asc(quietSpans.id))
  return new Map(linkIds.map(linkId => [linkId, rows.filter(row => row.linkId === null || row.linkId === linkId).map(row => ({ fromMs: row.startsAt.getTime(), toMs: row.endsAt.getTime() }))]))
}

interface Digested { readonly digest: string, readonly quiet: readonly Span[], readonly firstRowLeadMs: number, readonly uplink: Digested | null }

/** SHA-256 of all that goes into one pass's table: the link's own, the quiet spans that touch the pass, and its uplink's where it turns one around. */
export function tableDigest(link: Digested, pass: PassTimes): string {
  const own = ownDigest(link, pass)
  return link.uplink ? createHash('sha256').update(`${own} ${ownDigest(link.uplink, pass)}`).digest('hex') : own
}

function ownDigest({ digest, quiet, firstRowLeadMs }: Digested, pass: PassTimes): string {
  const spans = quietDuring(quiet, pass, firstRowLeadMs)
  return spans.length === 0 ? digest : createHash('sha256').update(JSON.stringify([digest, spans.map(span => [span.fromMs, span.toMs])])).digest('hex')
}
