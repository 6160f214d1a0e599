import { sql } from 'drizzle-orm'
import type { ServersOut } from '#shared/schemas/servers'
import { serverHeartbeatSchema } from '#shared/schemas/servers'
import type { Deps } from '../context'
import { readSettings } from '../settings/read-settings'
import { silentAfterMs } from './server-times'

interface Row extends Record<string, unknown> { id: string, host: string, pid: number, role: 'server' | 'worker', started_at: string, seen_at: string, stopped_at: string | null, silent: boolean }
const shownStopped = 20

/** Processes on this database: those that run first, then the last that stopped; and what the outward heartbeat does. */
export async function listServers({ db }: Pick<Deps, 'db'>): Promise<ServersOut> {
  const { rows } = await db.execute<Row>(sql`
    SELECT *, seen_at < clock_timestamp() - make_interval(secs => ${silentAfterMs / 1000}) AS silent FROM servers
    ORDER BY stopped_at DESC NULLS FIRST, started_at, id LIMIT 100`)
  const items = rows.map(row => ({
    id: row.id, host: row.host, pid: row.pid, role: row.role, state: row.stopped_at ? 'stopped' as const : row.silent ? 'silent' as const : 'alive' as const,
    startedAt: new Date(row.started_at).toISOString(), seenAt: new Date(row.seen_at).toISOString(), stoppedAt: row.stopped_at === null ? null : new Date(row.stopped_at).toISOString(),
  }))
  const stopped = items.filter(({ state }) => state === 'stopped').slice(0, shownStopped)
  const { heartbeatUrl } = await readSettings(db)
  const last = await db.execute<{ value: unknown }>(sql`SELECT value FROM settings WHERE key = 'heartbeatLast'`)
  return { items: [...items.filter(({ state }) => state !== 'stopped'), ...stopped], heartbeat: { url: heartbeatUrl, last: serverHeartbeatSchema.nullable().catch(null).parse(last.rows[0]?.value ?? null) } }
}
