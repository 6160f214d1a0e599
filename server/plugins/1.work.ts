import { setTimeout as wait } from 'node:timers/promises'
import { defineNitroPlugin } from 'nitropack/runtime'
import { useDatabase } from '~~/server/database/client'
import { lifecycle } from '~~/server/domain/schedule/lifecycle'
import { log } from '~~/server/http/log'
import { bootStep, isWorker, serves } from '~~/server/jobs/boot'
import { stopBoss } from '~~/server/jobs/boss'
import { startWork } from '~~/server/jobs/work'
import type { LocalMailServer } from '~~/server/mail/local-server'
import { startLocalMailServer } from '~~/server/mail/local-server'
import { useLocalMailServer } from '~~/server/mail/transport'
import { closePool } from '~~/server/workers/pool'

/** Jobs have this long to finish after a signal, and what a request waits for at least this long; the whole process has ten seconds. */
const drainMs = 6000
const answerMs = 2000
const wakeMs = 1500

/** The queue, the mail server that stands in while there is none, and an orderly end of both. */
export default defineNitroPlugin((nitroApp) => {
  if (!serves()) return
  let mailServer: LocalMailServer | null = null
  let ending: Promise<void> | null = null

  bootStep('work', async () => {
    const { db } = useDatabase()
    if (!isWorker() && !process.env.SMTP_URL && !mailServer) {
      mailServer = await startLocalMailServer(db)
      useLocalMailServer(mailServer.port)
    }
    await startWork(db, { heavyOnly: isWorker() })
  })

  // Requests under way finish meanwhile; the pool of connections closes behind both.
  const drain = () => ending ??= (async () => {
    lifecycle.stopping = true
    const steps = [() => stopBoss(drainMs), () => closePool(answerMs), () => mailServer?.close()]
    for (const step of steps) await Promise.resolve(step()).catch(error => log.warn({ error: String(error) }, 'a part did not end by itself'))
  })()
  process.once('SIGTERM', () => void drain())
  process.once('SIGINT', () => void drain())
  nitroApp.hooks.hook('close', async () => {
    await drain()
    // The schedule finishes what it is at and begins nothing more.
    await Promise.race([lifecycle.wake, wait(wakeMs)])
    await useDatabase().close()
  })
})
