import type PgBoss from 'pg-boss'
import type { Db } from '~~/server/database/client'
import { databaseNow } from '~~/server/database/client'
import { StillChanging } from '~~/server/domain/prediction/predict-station'
import { describeError } from '~~/server/http/describe-error'
import { log } from '~~/server/http/log'
import { runAutoUse } from './auto-use'
import { useBoss } from './boss'
import { runMail } from './mail'
import { runPredict } from './predict'
import type { Jobs } from './queue'
import { onSent } from './queue'
import { queues } from './queues.mjs'
import { runWebHook } from './web-hook'

/** How many of a kind run at once in one process. */
const atOnce = { 'predict': 2, 'mail': 2, 'web-hook': 4, 'auto-use': 1 }
const pollSeconds = { 'predict': 0.5, 'mail': 1, 'web-hook': 1, 'auto-use': 2 }

/** Takes jobs from the queue until it is stopped; `heavyOnly`: those that compute, and no messages. */
export async function startWork(db: Db, { heavyOnly = false } = {}): Promise<void> {
  const boss = useBoss()
  await boss.start()
  for (const queue of Object.values(queues)) await boss.createQueue(queue.name, queue)
  await work<Jobs['predict']>(boss, 'predict', async ({ data }) => runPredict({ db, now: await databaseNow(db) }, data))
  if (heavyOnly) return
  await work<Jobs['mail']>(boss, 'mail', job => runMail(db, job))
  await work<Jobs['web-hook']>(boss, 'web-hook', job => runWebHook(db, job))
  await work<Jobs['auto-use']>(boss, 'auto-use', async ({ data }) => runAutoUse({ db, now: await databaseNow(db) }, data))
}

async function work<T>(boss: PgBoss, name: keyof typeof atOnce, run: (job: PgBoss.JobWithMetadata<T>) => Promise<void>): Promise<void> {
  const ids: string[] = []
  onSent(name, () => ids.forEach(id => boss.notifyWorker(id)))
  for (let count = 0; count < atOnce[name]; count++) {
    let id = ''
    id = await boss.work<T>(name, { includeMetadata: true, batchSize: 1, pollingIntervalSeconds: pollSeconds[name] }, async ([job]) => {
      await run(job!).catch((error: unknown) => { throw told(name, error) })
      // Where there was one there may be more: look again at once.
      boss.notifyWorker(id)
    })
    ids.push(id)
  }
}

/** The queue keeps an error with its job, whole: the values of a statement do not belong there, and it holds no NUL. */
function told(name: string, error: unknown): Error {
  // A mail or message that waits for its receiver is shown where those are shown; inputs that still change are everyday.
  log[name === 'mail' || name === 'web-hook' || error instanceof StillChanging ? 'info' : 'warn']({ job: name, error: describeError(error) }, 'a job did not succeed; the queue tries it again')
  const message = error instanceof Error ? error.message.split('\nparams:', 1)[0]! : String(error)
  return new Error(message.replaceAll('\u0000', '').toWellFormed().slice(0, 1000))
}
