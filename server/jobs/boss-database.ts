import { setTimeout as wait } from 'node:timers/promises'
import pg from 'pg'
import { isUnavailable } from '~~/server/domain/errors'

export interface BossDatabase { executeSql(text: string, values: unknown[]): Promise<pg.QueryResult>, close(): Promise<void> }

const firstPauseMs = 200
const longestPauseMs = 2000

/**
 * The queue's own connections. While the database is away a statement waits here and is tried again: the queue package
 * reports the end of a job without looking at what comes of it, so that a report which failed would leave the job
 * taken until it expires.
 */
export function openBossDatabase(url: string, onWait: (error: unknown) => void): BossDatabase {
  const pool = new pg.Pool({ connectionString: url, max: 4, application_name: 'nullbeat-jobs', connectionTimeoutMillis: 3000, query_timeout: 30_000 })
  // A dropped idle connection is replaced when the next one is needed.
  pool.on('error', () => {})
  let isClosing = false
  return {
    async executeSql(text, values) {
      for (let pauseMs = firstPauseMs; ; pauseMs = Math.min(2 * pauseMs, longestPauseMs)) {
        try {
          return await pool.query(text, values)
        }
        catch (error) {
          if (isClosing || !isUnavailable(error)) throw error
          if (pauseMs === firstPauseMs) onWait(error)
          await wait(pauseMs)
        }
      }
    },
    close: () => {
      isClosing = true
      return pool.end()
    },
  }
}
