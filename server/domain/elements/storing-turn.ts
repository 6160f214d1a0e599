import { setTimeout as wait } from 'node:timers/promises'
import { sql } from 'drizzle-orm'
import type { Db } from '~~/server/database/client'
import { DomainError } from '../errors'

const turnPauseMs = 250
const turnPatienceMs = 120_000

let last: Promise<unknown> = Promise.resolve()
function afterTheOthers<T>(act: () => Promise<T>): Promise<T> {
  const mine = last.then(act, act)
  last = mine.catch(() => {})
  return mine
}

/** Whether a lock that ends with the transaction could be had at once. */
export async function takeLock(tx: Pick<Db, 'execute'>, name: string): Promise<boolean> {
  const { rows } = await tx.execute<{ free: boolean }>(sql`SELECT pg_try_advisory_xact_lock(hashtextextended(${name}, 0)) AS free`)
  return rows[0]!.free
}

/**
 * Runs a transaction that stores element sets when it is its turn: one at a time, here and on all servers, since two of
 * the same sets would wait for each other past a statement's time limit. Nobody holds a connection while waiting.
 */
export function inTurn<T>(db: Db, store: (tx: Db) => Promise<T>): Promise<T> {
  return afterTheOthers(async () => {
    for (let waitedMs = 0; waitedMs < turnPatienceMs; waitedMs += turnPauseMs) {
      const done = await db.transaction(async tx => await takeLock(tx, 'store-element-sets') ? { value: await store(tx) } : null)
      if (done) return done.value
      await wait(turnPauseMs)
    }
    throw new DomainError('unavailable', 'Another server is storing element sets: try again in a minute.', [], 60)
  })
}
