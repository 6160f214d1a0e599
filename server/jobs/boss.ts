import PgBoss from 'pg-boss'
import { log } from '~~/server/http/log'

let boss: PgBoss | null = null

/** The queue of this process. Its tables and queues are made by the migration. Time-tables are not its business. */
export function useBoss(): PgBoss {
  const url = process.env.DATABASE_URL
  if (!url) throw new Error('DATABASE_URL is not set: start the product with `npm start`, which sets it.')
  if (!boss) {
    boss = new PgBoss({ connectionString: url, application_name: 'nullbeat-jobs', max: 4, supervise: true, schedule: false, migrate: false, maintenanceIntervalSeconds: 30 })
    boss.on('error', error => log.warn({ error: error.message }, 'the queue cannot be served at the moment'))
  }
  return boss
}

/** Jobs under way have `timeoutMs` to finish; what has not goes back to the queue. */
export async function stopBoss(timeoutMs: number): Promise<void> {
  const stopping = boss
  boss = null
  await stopping?.stop({ graceful: true, wait: true, timeout: timeoutMs })
}
