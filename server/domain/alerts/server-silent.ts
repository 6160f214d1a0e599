import { sql } from 'drizzle-orm'
import { formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import { lifecycle } from '../schedule/lifecycle'
import { forgottenAfterMs, silentAfterMs, steadyAfterMs } from '../servers/server-times'
import type { Cause } from './cause'
import { standing } from './publication-failed'

interface Row extends Record<string, unknown> { id: string, host: string, pid: number, role: string, seen_at: string }

/**
 * Processes on this database that have stopped saying that they live. One that has itself been cut off a moment ago,
 * as all are when the database is away, waits until the others have had time to be seen again.
 */
export async function findServerSilent({ db }: Pick<Deps, 'db' | 'now'>): Promise<Cause[]> {
  if (Date.now() - lifecycle.steadySince < steadyAfterMs) {
    const { rows } = await db.execute<{ cause: string }>(sql`SELECT cause FROM alerts WHERE kind = 'server-silent' AND state <> 'closed'`)
    return rows.map(({ cause }) => standing('server-silent', cause))
  }
  const { rows } = await db.execute<Row>(sql`
    SELECT id, host, pid, role, seen_at FROM servers WHERE stopped_at IS NULL
      AND seen_at < clock_timestamp() - make_interval(secs => ${silentAfterMs / 1000}) AND seen_at > clock_timestamp() - make_interval(secs => ${forgottenAfterMs / 1000})`)
  return rows.map(row => ({
    kind: 'server-silent',
    cause: `server-silent:${row.id}`,
    severity: 'call',
    title: `${row.role === 'worker' ? 'Worker' : 'Server'} ${row.pid} on ${row.host} is silent`,
    detail: `Last seen ${formatUtc(Date.parse(row.seen_at), 'second')}, and it has not said that it stops. The others go on with its work; with one fewer there is less to spare.`,
    action: `Look at ${row.host}: does the process run, does it reach the database? Start it again. If it will not come back, forget it under Settings, Servers.`,
    count: 1,
    weight: 1,
    raises: true,
  }))
}
