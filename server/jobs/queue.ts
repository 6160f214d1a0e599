import { sql } from 'drizzle-orm'
import PgBoss from 'pg-boss'
import type { Db } from '~~/server/database/client'

/** What the queue carries. Data is small and names rows; the row is read when the job runs. */
export interface Jobs {
  /** Recompute passes and tables of one spacecraft at one station. */
  'predict': { spacecraftId: string, stationId: string, reason: string }
  'mail': { mailId: string }
  'web-hook': { deliveryId: string }
  /** Let the rule of one spacecraft judge what waits for it. */
  'auto-use': { spacecraftId: string }
}
export type JobName = keyof Jobs

const mostTries = 5

export { queues } from './queues.mjs'

/** Sends through the caller's transaction, so that a job exists exactly when its data does. */
const sender = new PgBoss({ db: { executeSql: () => Promise.reject(new Error('A job is sent inside a transaction.')) } })

/** Gives the job's id; null where one of the same singleton key waits already. */
export async function enqueue<N extends JobName>(db: Db, name: N, data: Jobs[N], options: PgBoss.SendOptions = {}): Promise<string | null> {
  wakeSoon(name)
  return sender.send(name, data, { ...options, db: { executeSql: (text, values) => executeIn(db, text, values) } })
}

/** A transaction of a few statements has mostly ended by then; a job that is not there yet is found when the queue is looked at next. */
const WAKE_AFTER_MS = 30
const wakers = new Map<JobName, () => void>()
const waking = new Set<JobName>()

/** Who takes jobs of a name in this process, told a moment after one was sent, so that nobody waits for the next look. */
export function onSent(name: JobName, wake: () => void): void {
  wakers.set(name, wake)
}

function wakeSoon(name: JobName): void {
  if (waking.has(name) || !wakers.has(name)) return
  waking.add(name)
  setTimeout(() => {
    waking.delete(name)
    wakers.get(name)?.()
  }, WAKE_AFTER_MS).unref()
}

/** Statements of bounded size: a fleet's pairs are tens of thousands. */
const jobsAtOnce = 1000

/**
 * One waiting job for each key. One that waits already takes the newer data where that is as urgent, and moves up where
 * it is more so. It stays locked until the caller's transaction ends: taken before that, it would run without what the
 * transaction changes, and nothing would be left to run afterwards. Give the keys in one order everywhere, so that two
 * callers wait for each other instead of blocking each other.
 */
export async function enqueueOnce<N extends JobName>(db: Db, name: N, jobs: readonly { key: string, data: Jobs[N] }[], { priority }: { priority: number }): Promise<void> {
  for (let start = 0; start < jobs.length; start += jobsAtOnce) await enqueueSome(db, name, jobs.slice(start, start + jobsAtOnce), priority)
  if (jobs.length > 0) wakeSoon(name)
}

async function enqueueSome<N extends JobName>(db: Db, name: N, jobs: readonly { key: string, data: Jobs[N] }[], priority: number): Promise<void> {
  let missing = jobs
  for (let tries = 0; tries < mostTries && missing.length > 0; tries++) {
    await sender.insert(missing.map(({ key, data }) => ({ name, data, singletonKey: key, priority })), { db: { executeSql: (text, values) => executeIn(db, text, values) } })
    const { rows } = await db.execute<{ key: string }>(sql`
      WITH wanted AS (SELECT x.key, x.data FROM jsonb_to_recordset(${JSON.stringify(missing)}::jsonb) AS x(key text, data jsonb)),
      held AS (SELECT j.id, w.data FROM pgboss.job j JOIN wanted w ON w.key = j.singleton_key WHERE j.name = ${name} AND j.state = 'created' ORDER BY j.singleton_key FOR UPDATE OF j)
      UPDATE pgboss.job j SET data = CASE WHEN j.priority <= ${priority} THEN held.data ELSE j.data END, priority = greatest(j.priority, ${priority})
      FROM held WHERE j.id = held.id AND j.name = ${name} RETURNING j.singleton_key AS key`)
    // One that is not among them has just been taken, so that there is room for another.
    const found = new Set(rows.map(row => row.key))
    missing = missing.filter(({ key }) => !found.has(key))
  }
  if (missing.length > 0) throw new Error(`The queue ${name} takes no job: is it made? The migration makes it.`)
}

/** The queue package hands over text with numbered places; the transaction's driver takes chunks. */
async function executeIn(db: Db, text: string, values: unknown[]) {
  const parts = text.split(/\$(\d+)/)
  const query = sql.empty()
  parts.forEach((part, index) => {
    query.append(index % 2 === 0 ? sql.raw(part) : sql`${values[Number(part) - 1] ?? null}`)
  })
  const { rows } = await db.execute(query)
  return { rows, rowCount: rows.length }
}
