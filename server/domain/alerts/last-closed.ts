import { sql } from 'drizzle-orm'
import type { Deps } from '../context'
import { at } from './coming-tables'
import type { AlertKind, CauseScope } from './cause'

/** How a cause's last alert ended. */
export interface LastClosed {
  alertId: string
  cause: string
  closedAt: Date
  closedBy: string | null
  closeReason: string | null
  /** Somebody closed it while its cause stood, at this weight, and the cause has not been gone since. */
  setAsideWeight: number | null
}

interface Row extends Record<string, unknown> { id: string, cause: string, closed_at: string, closed_by: string | null, close_reason: string | null, action: string | null, weight: number | null }

/** The trail says what was set aside and when its cause was gone: the newer of the two decides. */
const select = sql`
  SELECT DISTINCT ON (a.cause) a.id, a.cause, a.kind, a.spacecraft_id, a.station_id, a.closed_at, a.closed_by, a.close_reason, mark.action, mark.weight
  FROM alerts a LEFT JOIN LATERAL (
    SELECT action, ("after" ->> 'weight')::double precision AS weight FROM audit
    WHERE entity_kind = 'alert' AND entity_id = a.id::text AND action IN ('alert.set-aside', 'alert.cause-gone') ORDER BY id DESC LIMIT 1) mark ON true
  WHERE a.state = 'closed'`

const read = (row: Row): LastClosed => ({
  alertId: row.id, cause: row.cause, closedAt: new Date(row.closed_at), closedBy: row.closed_by, closeReason: row.close_reason,
  setAsideWeight: row.action === 'alert.set-aside' ? row.weight ?? 0 : null,
})

/** By cause. */
export async function lastClosedOf({ db }: Pick<Deps, 'db'>, causes: readonly string[]): Promise<Map<string, LastClosed>> {
  if (causes.length === 0) return new Map()
  const { rows } = await db.execute<Row>(sql`${select} AND a.cause IN (SELECT jsonb_array_elements_text(${JSON.stringify(causes)}::jsonb)) ORDER BY a.cause, a.closed_at DESC`)
  return new Map(rows.map(row => [row.cause, read(row)]))
}

const longestSetAsideMs = 30 * 24 * 3600_000

/** What is set aside at present, within a scope. */
export async function setAside({ db, now }: Pick<Deps, 'db' | 'now'>, kinds: readonly AlertKind[], scope: CauseScope): Promise<LastClosed[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT * FROM (${select} AND a.closed_at > ${at(new Date(now.getTime() - longestSetAsideMs))}
      AND a.kind IN (SELECT jsonb_array_elements_text(${JSON.stringify(kinds)}::jsonb))
      ${scope.spacecraftId ? sql`AND a.spacecraft_id = ${scope.spacecraftId}` : sql``} ${scope.stationId ? sql`AND a.station_id = ${scope.stationId}` : sql``}
      ORDER BY a.cause, a.closed_at DESC) last
    WHERE action = 'alert.set-aside'`)
  return rows.map(read)
}
