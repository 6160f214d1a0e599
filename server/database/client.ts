import type { Socket } from 'node:net'
import { sql } from 'drizzle-orm'
import type { NodePgDatabase } from 'drizzle-orm/node-postgres'
import { drizzle } from 'drizzle-orm/node-postgres'
import pg from 'pg'
import * as schema from './schema'

/** A connection or a transaction: domain functions take either. */
export type Db = Pick<NodePgDatabase<typeof schema>, 'select' | 'selectDistinct' | 'insert' | 'update' | 'delete' | 'execute' | 'transaction' | 'query' | '$count'>

export interface Database { db: Db, pool: pg.Pool, close(): Promise<void> }

/** Leaves a request that a frozen database keeps waiting time to be answered within 5 s. */
const statementLimitMs = 4200

/** Requests give up within 5 s when the database is frozen; the pool never grows past its size. */
export function openDatabase(url: string, options: { max?: number } = {}): Database {
  const pool = new pg.Pool({
    connectionString: url,
    max: options.max ?? 12,
    connectionTimeoutMillis: 3000,
    query_timeout: statementLimitMs,
    statement_timeout: statementLimitMs,
    idle_in_transaction_session_timeout: 30_000,
    application_name: 'nullbeat',
  })
  // A dropped idle connection is replaced at the next request; without a listener it would end the process.
  pool.on('error', () => {})
  pool.on('connect', cutWhenLate)
  return { db: drizzle(pool, { schema }), pool, close: () => pool.end() }
}

/**
 * A statement that was not answered in time leaves its connection useless: it is cut at once, or the transaction’s
 * ROLLBACK would wait as long again.
 */
function cutWhenLate(client: pg.PoolClient): void {
  const query = client.query.bind(client) as (...args: unknown[]) => unknown
  const cut = (error: Error) => {
    if (error.message === 'Query read timeout') (client as unknown as { connection: { stream: Socket } }).connection.stream.destroy()
    throw error
  }
  Object.assign(client, { query: (...args: unknown[]) => {
    const result = query(...args)
    return result instanceof Promise ? result.catch(cut) : result
  } })
}

let shared: Database | null = null

/** The server's own connection pool, from DATABASE_URL. */
export function useDatabase(): Database {
  if (!shared) {
    const url = process.env.DATABASE_URL
    if (!url) throw new Error('DATABASE_URL is not set: start the product with `npm start`, which sets it.')
    shared = openDatabase(url)
  }
  return shared
}

/**
 * The one clock that decides what is due, as a column: the database's, UTC milliseconds. Tests may shift it, by a row that
 * only a server started with NULLBEAT_TEST=1 looks at.
 */
export function clockMs() {
  const shift = process.env.NULLBEAT_TEST === '1'
    ? sql`coalesce((SELECT (value #>> '{}')::double precision FROM settings WHERE key = 'testClockShiftMs'), 0)`
    : sql`0::double precision`
  return sql<string>`floor(extract(epoch FROM clock_timestamp()) * 1000 + ${shift})`
}

export async function databaseNow(db: Db): Promise<Date> {
  const result = await db.execute<{ ms: string }>(sql`SELECT ${clockMs()} AS ms`)
  return new Date(Number(result.rows[0]!.ms))
}
