import { defineNitroPlugin } from 'nitropack/runtime'
import { databaseNow, useDatabase } from '~~/server/database/client'
import { ensureFirstAdministrator } from '~~/server/domain/auth/ensure-first-administrator'
import { systemActor } from '~~/server/domain/context'
import { loadDemo } from '~~/server/domain/demo/load-demo'
import { isUnavailable } from '~~/server/domain/errors'
import { resumeUploads } from '~~/server/domain/elements/resume-uploads'
import { lifecycle } from '~~/server/domain/schedule/lifecycle'
import { describeError } from '~~/server/http/describe-error'
import { log } from '~~/server/http/log'
import { bootStep, isWorker, serves } from '~~/server/jobs/boot'

/** An empty installation hands out the address of its first administrator; the demo loads its operator instead. */
export default defineNitroPlugin(() => {
  if (!serves() || isWorker()) return
  const demo = process.env.NULLBEAT_DEMO === '1'
  if (demo) lifecycle.demo = 'loading'
  bootStep('start', async () => {
    const { db } = useDatabase()
    const now = await databaseNow(db)
    const { resumed, broken } = await resumeUploads({ db, now, actor: systemActor })
    if (resumed + broken > 0) log.info({ resumed, broken }, 'uploads that a stop had cut off')
    if (!demo) {
      const address = await ensureFirstAdministrator({ db, now })
      // One bare line for the start command, which shows it to whoever started the product.
      if (address) process.stdout.write(`first-administrator ${address}\n`)
      return
    }
    try {
      await loadDemo({ db, now, actor: systemActor }, process.env.DEMO_PASSWORD ?? '')
      lifecycle.demo = 'loaded'
    }
    catch (error) {
      if (isUnavailable(error)) throw error
      lifecycle.demo = 'failed'
      log.error({ error: describeError(error) }, 'the demo did not load')
    }
  })
})
