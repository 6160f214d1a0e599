import { defineNitroPlugin } from 'nitropack/runtime'
import cron from 'node-cron'
import { databaseNow, useDatabase } from '~~/server/database/client'
import { systemActor } from '~~/server/domain/context'
import type { FolderMemory } from '~~/server/domain/elements/folder'
import { lookAtFolder } from '~~/server/domain/elements/folder'
import { resumeUploads } from '~~/server/domain/elements/resume-uploads'
import { lifecycle } from '~~/server/domain/schedule/lifecycle'
import { describeError } from '~~/server/http/describe-error'
import { log } from '~~/server/http/log'
import { bootStep, isWorker, serves } from '~~/server/jobs/boot'

/** Looks every few seconds at the watched folder, and after uploads that a stopped server has left. */
export default defineNitroPlugin((nitroApp) => {
  if (!serves() || isWorker()) return
  const memory: FolderMemory = new Map()
  let busy: Promise<void> | null = null
  let told = ''

  const look = async () => {
    const { db } = useDatabase()
    const now = await databaseNow(db)
    await resumeUploads({ db, now, actor: systemActor }, { atBoot: false })
    const taken = await lookAtFolder({ db, now }, memory)
    if (taken.length > 0) log.info({ files: taken.length }, 'the watched folder was emptied')
    told = ''
  }
  const wakeUp = () => {
    if (lifecycle.stopping || busy) return
    busy = look().catch((error: unknown) => {
      // A folder that is gone stays gone: said once, not every few seconds.
      const said = describeError(error)
      if (JSON.stringify(said) !== told) log.warn({ error: said }, 'the watched folder or an upload waits')
      told = JSON.stringify(said)
    }).finally(() => { busy = null })
  }
  bootStep('uploads', async () => {
    const task = cron.schedule('*/3 * * * * *', wakeUp, { name: 'uploads', suppressMissedWarning: true })
    nitroApp.hooks.hook('close', async () => {
      await task.stop()
    })
  })
})
