import { sql } from 'drizzle-orm'
import PgBoss from 'pg-boss'
import type { Db } from '~~/server/database/client'

/** What the queue carries. Data is small and names rows; the row is read when the job runs. */
export interface Jobs {
  /** Recompute passes and tables of one spacecraft at one station. */
  'predict': { spacecraftId: string, stationId: string, reason: string }
  'mail': { mailId: string }
}
export type JobName = keyof Jobs

export { queues } from './queues.mjs'

/** Sends through the caller's transaction, so that a job exists exactly when its data does. */
const sender = new PgBoss({ db: { executeSql: () => Promise.reject(new Error('A job is sent inside a transaction.')) } })

export async function enqueue<N extends JobName>(db: Db, name: N, data: Jobs[N], options: PgBoss.SendOptions = {}): Promise<void> {
  await sender.send(name, data, { ...options, db: { executeSql: (text, values) => executeIn(db, text, values) } })
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
