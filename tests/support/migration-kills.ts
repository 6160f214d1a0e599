import { spawn } from 'node:child_process'
import { join } from 'node:path'
import { setTimeout as wait } from 'node:timers/promises'
import pg from 'pg'
import { root } from '../../server/cli/lib/paths.mjs'
import { boundToParent } from '../../server/cli/lib/processes.mjs'
import { createTestDatabase } from './database'

export interface Migration { ended: Promise<{ code: number | null, output: string }>, kill: () => void }

/** The migration command as a process of its own. */
export function startMigration(databaseUrl: string): Migration {
  const [program, args] = boundToParent('KILL', process.execPath, [join(root, 'server/cli/migrate.mjs')])
  const child = spawn(program, args, { cwd: root, stdio: ['ignore', 'pipe', 'pipe'], env: { PATH: process.env.PATH, DATABASE_URL: databaseUrl } })
  let output = ''
  for (const stream of [child.stdout, child.stderr]) stream.setEncoding('utf8').on('data', (text: string) => { output += text })
  const ended = new Promise<{ code: number | null, output: string }>(resolve => child.once('close', code => resolve({ code, output })))
  return { ended, kill: () => void child.kill('SIGKILL') }
}

export interface Kill { afterMs: number, rerun: { code: number | null, output: string }, applied: number, shape: string }

/** Kills a migration of an empty database once, at the moment given, and runs it again. */
export async function killMigration(afterMs: number): Promise<Kill> {
  const { url, drop } = await createTestDatabase({ empty: true })
  try {
    const killed = startMigration(url)
    await Promise.race([wait(afterMs), killed.ended])
    killed.kill()
    await killed.ended
    const rerun = await startMigration(url).ended
    return { afterMs, rerun, ...await readShape(url) }
  }
  finally {
    await drop()
  }
}

/** How many migrations a database counts, and all that they make: columns, indexes, rules, triggers and queues, in words. */
export async function readShape(url: string): Promise<{ applied: number, shape: string }> {
  const client = new pg.Client({ connectionString: url })
  await client.connect()
  const list = async (query: string) => (await client.query<{ line: string }>(query)).rows.map(row => row.line).join('\n')
  try {
    const { rows } = await client.query<{ count: number }>('SELECT count(*)::int AS count FROM drizzle.__drizzle_migrations')
    const shape = [
      await list(`SELECT concat_ws(' ', table_schema, table_name, column_name, data_type, is_nullable, column_default) AS line FROM information_schema.columns WHERE table_schema IN ('public','pgboss','drizzle') ORDER BY 1`),
      await list(`SELECT indexdef AS line FROM pg_indexes WHERE schemaname IN ('public','pgboss') ORDER BY 1`),
      await list(`SELECT concat_ws(' ', conrelid::regclass, conname, pg_get_constraintdef(oid)) AS line FROM pg_constraint WHERE connamespace IN ('public'::regnamespace, 'pgboss'::regnamespace) ORDER BY 1`),
      await list(`SELECT pg_get_triggerdef(oid) AS line FROM pg_trigger WHERE NOT tgisinternal ORDER BY 1`),
      await list(`SELECT concat_ws(' ', name, policy, retry_limit, retry_delay, retry_backoff, expire_seconds) AS line FROM pgboss.queue ORDER BY 1`),
    ].join('\n\n')
    return { applied: rows[0]!.count, shape }
  }
  finally {
    await client.end()
  }
}
