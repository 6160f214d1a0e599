import type PgBoss from 'pg-boss'
import type { Db } from '~~/server/database/client'
import { databaseNow } from '~~/server/database/client'
import { sendMail } from '~~/server/mail/send-mail'
import { useTransport } from '~~/server/mail/transport'
import type { Jobs } from './queue'

/** One try to deliver one mail. What it throws makes the queue try again. */
export async function runMail(db: Db, job: PgBoss.JobWithMetadata<Jobs['mail']>): Promise<void> {
  await sendMail({ db, now: await databaseNow(db) }, job.data.mailId, { transport: useTransport(), lastTry: job.retryCount >= job.retryLimit })
}
