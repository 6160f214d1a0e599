import { sql } from 'drizzle-orm'
import type { Verdict } from '#shared/physics/types'
import type { PreviewOut } from '#shared/schemas/elements'
import type { Deps } from '../context'

const MOST = 500

interface Row extends Record<string, unknown> {
  table_id: string
  pass_id: string
  station: string
  link: string
  aos: string
  number: number
  verdict: Verdict
  next_verdict: Verdict
  next_state: string
  reason: string | null
}

/** What a set did: revisions with the stations in whose place one made with it was drafted, the latest pass first. */
export async function effectsOfSet({ db }: Pick<Deps, 'db'>, { id }: { id: string }): Promise<PreviewOut> {
  const { rows } = await db.execute<Row>(sql`
    SELECT t.id AS table_id, p.id AS pass_id, st.name AS station, l.name AS link, p.aos, old.number, old.verdict, new.verdict AS next_verdict, new.state AS next_state, new.reason
    FROM table_revisions new
      JOIN table_revisions old ON old.table_id = new.table_id AND old.number = new.number - 1 AND old.published_at IS NOT NULL AND old.element_set_id <> new.element_set_id
      JOIN tables t ON t.id = new.table_id JOIN passes p ON p.id = t.pass_id JOIN stations st ON st.id = p.station_id JOIN links l ON l.id = t.link_id
    WHERE new.element_set_id = ${id}
    ORDER BY p.aos DESC, t.id LIMIT ${MOST}`)
  return {
    setId: id,
    asOf: 'after',
    published: rows.map(row => ({
      tableId: row.table_id, passId: row.pass_id, stationName: row.station, linkName: row.link, aos: new Date(row.aos).toISOString(), revision: row.number,
      verdictBefore: row.verdict, verdictAfter: row.next_verdict, gone: null,
      supersedes: ['published', 'collected', 'superseded', 'withdrawn'].includes(row.next_state), movesByHz: null, limitHz: null, reason: row.reason,
    })),
    drafts: [],
    looked: { published: rows.length, drafts: 0, passesGone: 0, passesNew: 0 },
  }
}
