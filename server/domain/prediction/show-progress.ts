import { sql } from 'drizzle-orm'
import type { z } from 'zod'
import type { progressOut } from '#shared/schemas/predictions'
import type { Deps } from '../context'

/** How much computing waits: counts of the queue's own rows, so that every server and every reload tells the same. */
export async function showProgress({ db }: Pick<Deps, 'db'>): Promise<z.infer<typeof progressOut>> {
  const { rows: [row] } = await db.execute<{ left: number, total: number, finished: string | null }>(sql`
    WITH waiting AS (
      SELECT count(*)::int AS count, min(created_on) AS since FROM pgboss.job WHERE name = 'predict' AND state IN ('created', 'retry', 'active')
    ), done AS (
      SELECT max(completed_on) AS last, count(*) FILTER (WHERE completed_on >= (SELECT since FROM waiting))::int AS count
      FROM pgboss.job WHERE name = 'predict' AND state = 'completed'
    )
    SELECT waiting.count AS left, waiting.count + done.count AS total, to_char(done.last AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"') AS finished FROM waiting, done`)
  return { left: row!.left, total: row!.total, finishedAt: row!.finished }
}
