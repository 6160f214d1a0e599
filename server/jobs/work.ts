import type PgBoss from 'pg-boss'
import type { Db } from '~~/server/database/client'
import { databaseNow } from '~~/server/database/client'
import { useBoss } from './boss'
import { runMail } from './mail'
import { runPredict } from './predict'
import type { Jobs } from './queue'
import { queues } from './queues.mjs'

/** How many of a kind run at once in one process. */
const atOnce = { predict: 2, mail: 2 }
const pollSeconds = { predict: 0.5, mail: 1 }

/** Takes jobs from the queue until it is stopped. */
export async function startWork(db: Db): Promise<void> {
  const boss = useBoss()
  await boss.start()
  for (const queue of Object.values(queues)) await boss.createQueue(queue.name, queue)
  await work<Jobs['predict']>(boss, 'predict', async ({ data }) => runPredict({ db, now: await databaseNow(db) }, data))
  await work<Jobs['mail']>(boss, 'mail', job => runMail(db, job))
}

async function work<T>(boss: PgBoss, name: keyof typeof atOnce, run: (job: PgBoss.JobWithMetadata<T>) => Promise<void>): Promise<void> {
  for (let count = 0; count < atOnce[name]; count++) {
    let id = ''
    id = await boss.work<T>(name, { includeMetadata: true, batchSize: 1, pollingIntervalSeconds: pollSeconds[name] }, async ([job]) => {
      await run(job!)
      // Where there was one there may be more: look again at once.
      boss.notifyWorker(id)
    })
  }
}
