import { setTimeout as wait } from 'node:timers/promises'
import { sql } from 'drizzle-orm'
import { expect, it } from 'vitest'
import { databaseNow, openDatabase } from '../../server/database/client'
import { alerts, settings } from '../../server/database/schema'
import { createTestDatabase } from '../support/database'
import { startHttpReceiver } from '../support/http-receiver'
import { layOutScene, waitUntilPublished } from '../support/publication-scene'
import { startServer } from '../support/server'

it('of two servers one stalls: it is called silent within two minutes and the other publishes on time; when that stalls too, the heartbeat ceases', async () => {
  const made = await createTestDatabase()
  const { db, close } = openDatabase(made.url, { max: 2 })
  const receiver = await startHttpReceiver()
  await db.insert(settings).values({ key: 'heartbeatUrl', value: receiver.url })
  const options = { databaseUrl: made.url, env: { ALLOW_INTERNAL_HEARTBEAT: '1' } }
  const [one, other] = await Promise.all([startServer(options), startServer(options)])
  try {
    await wait(40_000)
    process.kill(other.pid, 'SIGSTOP')
    const stalled = performance.now()
    const scene = await layOutScene(db, await databaseNow(db))
    await scene.addApproved(50, new Date((await databaseNow(db)).getTime() + 55 * 60_000))
    await waitUntilPublished(db, 60_000)
    await expect.poll(() => db.$count(alerts, sql`kind = 'server-silent' AND state <> 'closed'`), { timeout: 120_000, interval: 500 }).toBe(1)
    console.info({ silentAfterS: Math.round((performance.now() - stalled) / 1000) })

    await expect.poll(() => receiver.received.length, { timeout: 90_000 }).toBeGreaterThan(0)
    process.kill(one.pid, 'SIGSTOP')
    await wait(1000)
    const heard = receiver.received.length
    await wait(150_000)
    expect(receiver.received).toHaveLength(heard)
  }
  finally {
    one.kill()
    other.kill()
    await receiver.close()
    await close()
    await made.drop()
  }
})
