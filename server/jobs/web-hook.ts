import type PgBoss from 'pg-boss'
import type { Db } from '~~/server/database/client'
import { databaseNow } from '~~/server/database/client'
import { deliverWebHook } from '~~/server/domain/web-hooks/deliver-web-hook'
import { webHookPolicy } from '~~/server/outward/policy'
import type { Jobs } from './queue'

/** One try to deliver one message. What it throws makes the queue try again. */
export async function runWebHook(db: Db, job: PgBoss.JobWithMetadata<Jobs['web-hook']>): Promise<void> {
  await deliverWebHook({ db, now: await databaseNow(db) }, job.data.deliveryId, { outward: { policy: webHookPolicy() }, lastTry: job.retryCount >= job.retryLimit })
}
