import { defineNitroPlugin } from 'nitropack/runtime'
import cron from 'node-cron'
import { databaseNow, useDatabase } from '~~/server/database/client'
import { isUnavailable } from '~~/server/domain/errors'
import { lifecycle } from '~~/server/domain/schedule/lifecycle'
import { wake } from '~~/server/domain/schedule/wake'
import { describeError } from '~~/server/http/describe-error'
import { log } from '~~/server/http/log'
import { bootStep, isWorker, serves } from '~~/server/jobs/boot'

const alertsEveryMs = 60_000

/** Wakes the schedule every five seconds. What is due is rows compared with the database's clock: a wake lost is made up by the next. */
export default defineNitroPlugin((nitroApp) => {
  if (!serves() || isWorker()) return
  let alertsAt = 0

  const onError = (part: string, error: unknown) => {
    const told = { part, error: describeError(error) }
    if (isUnavailable(error)) log.warn(told, 'the schedule waits for the database')
    else log.error(told, 'a part of the schedule failed')
  }
  const beat = async () => {
    try {
      const { db } = useDatabase()
      const now = await databaseNow(db)
      // This process's own time tells only how often to look, never what is due.
      const withAlerts = performance.now() - alertsAt >= alertsEveryMs || alertsAt === 0
      if (withAlerts) alertsAt = performance.now()
      await wake({ db, now }, { withAlerts, onError })
    }
    catch (error) {
      onError('wake', error)
    }
    lifecycle.schedulerBeatAt = Date.now()
  }
  const wakeUp = () => {
    if (lifecycle.stopping || lifecycle.wake) return
    lifecycle.wake = beat().finally(() => { lifecycle.wake = null })
  }

  bootStep('schedule', async () => {
    wakeUp()
    const task = cron.schedule('*/5 * * * * *', wakeUp, { name: 'wake', suppressMissedWarning: true })
    nitroApp.hooks.hook('close', async () => {
      await task.stop()
    })
  })
})
