import { sql } from 'drizzle-orm'
import type { z } from 'zod'
import type { feedListOut } from '#shared/schemas/station-feed'
import type { Deps } from '../context'
import { at } from '../alerts/coming-tables'
import { readCursor, toPage } from '../cursor'
import { passKey } from '../tables/pass-filter'
import { entityTag } from './entity-tag'

type FeedList = z.infer<typeof feedListOut>
interface Row extends Record<string, unknown> { id: string, number: number, state: FeedList['items'][number]['state'], digest: string, published_at: string, pass_id: string, spacecraft: string, aos: string, culmination: string, los: string, link_id: string, link: string, direction: 'uplink' | 'downlink' }

export interface FeedQuery { stationId: string, from?: string, to?: string, limit: number, cursor?: string }

/** Nothing is predicted further ahead, so no pass is longer; it keeps the search off the passes of past years. */
const longestPassDays = 15

/** What a station has been given, in its newest published revision, withdrawn ones too, by AOS: from passes not over yet onwards unless told otherwise. */
export async function listFeed({ db, now }: Pick<Deps, 'db' | 'now'>, { stationId, from, to, limit, cursor }: FeedQuery): Promise<FeedList> {
  const after = readCursor(cursor, passKey)
  const { rows } = await db.execute<Row>(sql`
    SELECT t.id, r.number, r.state, r.digest, r.published_at, p.id AS pass_id, sc.name AS spacecraft, p.aos, p.culmination, p.los, l.id AS link_id, l.name AS link, l.direction
    FROM passes p JOIN tables t ON t.pass_id = p.id JOIN spacecraft sc ON sc.id = p.spacecraft_id JOIN links l ON l.id = t.link_id
    JOIN LATERAL (SELECT number, state, digest, published_at FROM table_revisions WHERE table_id = t.id AND published_at IS NOT NULL ORDER BY number DESC LIMIT 1) r ON true
    WHERE p.station_id = ${stationId} AND p.los > ${from ?? now.toISOString()}::timestamptz AND p.aos > ${from ?? now.toISOString()}::timestamptz - ${longestPassDays} * interval '1 day' ${to ? sql`AND p.aos < ${at(new Date(to))}` : sql``}
      ${after ? sql`AND (p.aos, t.id) > (${after[0]}::timestamptz, ${after[1]}::uuid)` : sql``}
    ORDER BY p.aos, t.id LIMIT ${limit + 1}`)
  const iso = (text: string) => new Date(text).toISOString()
  const page = toPage(rows, limit, row => [iso(row.aos), row.id])
  return {
    items: page.rows.map(row => ({
      id: row.id, revision: row.number, state: row.state, digest: row.digest, eTag: entityTag(row.digest, 'json'), publishedAt: iso(row.published_at),
      pass: { id: row.pass_id, spacecraftName: row.spacecraft, aos: iso(row.aos), culmination: iso(row.culmination), los: iso(row.los) },
      link: { id: row.link_id, name: row.link, direction: row.direction },
    })),
    nextCursor: page.nextCursor,
  }
}
