import PgBoss from 'pg-boss'
import { log } from '~~/server/http/log'
import type { BossDatabase } from './boss-database'
import { openBossDatabase } from './boss-database'

let current: { boss: PgBoss, database: BossDatabase } | null = null

/** The queue of this process. Its tables and queues are made by the migration. Time-tables are not its business. */
export function useBoss(): PgBoss {
  const url = process.env.DATABASE_URL
  if (!url) throw new Error('DATABASE_URL is not set: start the product with `npm start`, which sets it.')
  if (!current) {
    const tell = (error: unknown) => log.warn({ error: error instanceof Error ? error.message : String(error) }, 'the queue cannot be served at the moment')
    const database = openBossDatabase(url, tell)
    const boss = new PgBoss({ db: database, supervise: true, schedule: false, migrate: false, maintenanceIntervalSeconds: 30 })
    boss.on('error', tell)
    current = { boss, database }
  }
  return current.boss
}

/** Jobs under way have `timeoutMs` to finish; what has not goes back to the queue. */
export async function stopBoss(timeoutMs: number): Promise<void> {
  const stopping = current
  current = null
  await stopping?.boss.stop({ graceful: true, wait: true, timeout: timeoutMs })
  await stopping?.database.close()
}
