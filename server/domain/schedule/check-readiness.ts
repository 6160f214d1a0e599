import { sql } from 'drizzle-orm'
import { useDatabase } from '~~/server/database/client'
import journal from '~~/drizzle/meta/_journal.json'
import { lifecycle } from './lifecycle'

/** The scheduler wakes every few seconds; silence for this long means that it is stuck. */
const schedulerSilenceMs = 60_000

/** Each part says ok, or what is wrong with it. Never throws. */
export async function checkReadiness(): Promise<Record<string, string>> {
  return {
    ...await checkDatabase(),
    ...(process.env.NULLBEAT_ROLE === 'worker' ? {} : { scheduler: Date.now() - lifecycle.schedulerBeatAt < schedulerSilenceMs ? 'ok' : 'has not woken for a minute' }),
    ...(lifecycle.demo === 'off' ? {} : { demo: lifecycle.demo === 'loaded' ? 'ok' : lifecycle.demo }),
    ...(lifecycle.stopping ? { process: 'stopping' } : {}),
  }
}

async function checkDatabase(): Promise<Record<string, string>> {
  try {
    const { rows } = await useDatabase().db.execute<{ count: number }>(sql`SELECT count(*)::int AS count FROM drizzle.__drizzle_migrations`)
    const missing = journal.entries.length - rows[0]!.count
    return { database: 'ok', migrations: missing === 0 ? 'ok' : missing > 0 ? `${missing} not applied` : 'the database is newer than this server' }
  }
  catch (error) {
    return /__drizzle_migrations/.test(String(error)) && /does not exist/.test(String((error as Error).cause ?? error))
      ? { database: 'ok', migrations: 'none applied' }
      : { database: 'out of reach', migrations: 'unknown' }
  }
}
