import { expect } from 'vitest'
import { databaseNow, openDatabase } from '../../server/database/client'
import { webHookDeliveries, webHooks } from '../../server/database/schema'
import { createTestDatabase } from './database'
import { startHttpReceiver } from './http-receiver'
import { killServers } from './kill-servers'
import { expectEachPublishedOnce, layOutScene, waitUntilPublished } from './publication-scene'
import { runSeed, seededRandom } from './random'

export interface KillFigures { kills: number, publications: number, told: number, seconds: number }

/** Kills one of two servers at random moments while both publish; then each table is out exactly once, and told. */
export async function killWhilePublishing(kills: number, perKill: number): Promise<KillFigures> {
  const made = await createTestDatabase()
  const { db, close } = openDatabase(made.url, { max: 3 })
  const receiver = await startHttpReceiver()
  const began = performance.now()
  try {
    const scene = await layOutScene(db, await databaseNow(db))
    await db.insert(webHooks).values({ name: 'Told', url: receiver.url, secret: 'whsec_YSBzZWNyZXQgb2YgdGhlIHRlc3Rz', events: ['table.published'], createdBy: 'Test' })
    const running = await killServers({
      kills, random: seededRandom(runSeed()), withinMs: 4000, options: { databaseUrl: made.url, env: { ALLOW_INTERNAL_WEB_HOOKS: '1', LOG_LEVEL: 'warn' } },
      beforeEach: async () => scene.addApproved(perKill, new Date((await databaseNow(db)).getTime() + 55 * 60_000)),
    })
    try {
      await waitUntilPublished(db, 300_000)
      await expectEachPublishedOnce(db, scene.added())
      const messages = await db.select().from(webHookDeliveries)
      expect(messages).toHaveLength(scene.added())
      expect(new Set(messages.map(({ body }) => (JSON.parse(body) as { data: { tableId: string } }).data.tableId)).size).toBe(scene.added())
    }
    finally {
      await Promise.all(running.map(server => server.stop()))
    }
    return { kills, publications: scene.added(), told: new Set(receiver.received.map(({ headers }) => headers['webhook-id'])).size, seconds: Math.round((performance.now() - began) / 1000) }
  }
  finally {
    await receiver.close()
    await close()
    await made.drop()
  }
}
