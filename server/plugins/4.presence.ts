import { hostname } from 'node:os'
import { defineNitroPlugin } from 'nitropack/runtime'
import { databaseNow, useDatabase } from '~~/server/database/client'
import { reconcileAlerts } from '~~/server/domain/alerts/reconcile-alerts'
import { scheduleActor } from '~~/server/domain/context'
import { lifecycle } from '~~/server/domain/schedule/lifecycle'
import { announceServer, beatServer, endServer } from '~~/server/domain/servers/announce-server'
import { sendHeartbeat } from '~~/server/domain/servers/send-heartbeat'
import { beatMs } from '~~/server/domain/servers/server-times'
import { describeError } from '~~/server/http/describe-error'
import { log } from '~~/server/http/log'
import { bootStep, isWorker, serves } from '~~/server/jobs/boot'
import { heartbeatPolicy } from '~~/server/outward/policy'

const heartbeatEveryMs = 60_000
/** A beat later than this was cut off from the database, or the whole process stood still. */
const gapMs = 3 * beatMs

/** Says every ten seconds that this process lives, looks whether the others do, and calls outward while all is well. */
export default defineNitroPlugin((nitroApp) => {
  if (!serves()) return
  const me = { host: hostname(), pid: process.pid, role: isWorker() ? 'worker' as const : 'server' as const }
  let id: string | null = null
  let seenAt = Date.now()
  let heartbeatAt = 0
  let busy = false
  lifecycle.steadySince = Date.now()

  const beat = async () => {
    const { db } = useDatabase()
    if (id === null || !await beatServer({ db }, id)) id = await announceServer({ db }, me, isAlive)
    const now = Date.now()
    if (now - seenAt > gapMs) lifecycle.steadySince = now
    seenAt = now
    if (isWorker()) return
    await reconcileAlerts({ db, actor: scheduleActor, now: await databaseNow(db) }, { kinds: ['server-silent'] })
    if (performance.now() - heartbeatAt < heartbeatEveryMs && heartbeatAt !== 0) return
    const ok = await sendHeartbeat({ db, now: await databaseNow(db) }, { wokeMsAgo: Date.now() - lifecycle.schedulerBeatAt, outward: { policy: heartbeatPolicy() } })
    // Not called because not all was well, or for want of an address: that is looked at with every beat.
    if (ok !== null) heartbeatAt = performance.now()
    if (ok === false) log.warn('the address of the heartbeat did not answer as it should')
  }
  const tick = async () => {
    if (busy || lifecycle.stopping) return
    busy = true
    await beat().catch(error => log.warn({ error: describeError(error) }, 'this process could not say that it lives'))
    busy = false
  }

  bootStep('presence', async () => {
    await tick()
    const timer = setInterval(() => void tick(), beatMs)
    const end = () => {
      clearInterval(timer)
      if (id !== null) void endServer({ db: useDatabase().db }, id).catch(() => {})
      id = null
    }
    process.once('SIGTERM', end)
    process.once('SIGINT', end)
    nitroApp.hooks.hook('close', async () => end())
  })
})

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0)
    return true
  }
  catch (error) {
    // Another user's process lives too.
    return (error as NodeJS.ErrnoException).code === 'EPERM'
  }
}
