import { sql } from 'drizzle-orm'
import type { Db } from '../../server/database/client'
import type { JobName, Jobs } from '../../server/jobs/queue'

/** What waits in the queue under a name, oldest first. */
export async function queuedJobs<N extends JobName>(db: Db, name: N): Promise<Jobs[N][]> {
  const { rows } = await db.execute<{ data: Jobs[N] }>(sql`SELECT data FROM pgboss.job WHERE name = ${name} AND state = 'created' ORDER BY created_on, data::text`)
  return rows.map(row => row.data)
}

/** So that a test sees only what follows. */
export async function emptyQueue(db: Db): Promise<void> {
  await db.execute(sql`DELETE FROM pgboss.job`)
}
