import { setTimeout as wait } from 'node:timers/promises'
import { sql } from 'drizzle-orm'
import { expect } from 'vitest'
import type { Db } from '../../server/database/client'
import { databaseNow, openDatabase } from '../../server/database/client'
import { slots } from '../../server/database/schema'
import { createTestDatabase } from './database'
import { addStation } from './fixtures'
import { expectEachPublishedOnce, layOutScene, leadMinutes, waitUntilPublished } from './publication-scene'
import { startServer } from './server'

const minute = 60_000

/** Only a server started for tests looks at this row. */
export const shiftClock = (db: Db, ms: number) => db.execute(sql`INSERT INTO settings (key, value) VALUES ('testClockShiftMs', to_jsonb(${ms}::double precision)) ON CONFLICT (key) DO UPDATE SET value = excluded.value`)

/**
 * Two servers live through an hour of schedule, as it passes or, `quick`, in steps of the test's clock: tables come due
 * minute by minute, and stations have their evenings in it. Each slot and each table happens once.
 */
export async function liveThroughAnHour({ tables, quick }: { tables: number, quick?: { steps: number, stepWaitMs: number } }): Promise<{ slots: number, publications: number, evenings: number }> {
  const made = await createTestDatabase()
  const { db, close } = openDatabase(made.url, { max: 3 })
  const options = { databaseUrl: made.url, env: { LOG_LEVEL: 'warn' } }
  try {
    await shiftClock(db, 0)
    const start = await databaseNow(db)
    const scene = await layOutScene(db, start)
    // Lead slots over the hour: each comes due an hour before its AOS.
    await scene.addApproved(tables, new Date(start.getTime() + (leadMinutes + 1) * minute), 57 * minute / tables)
    const evenings = [7, 21, 38, 52]
    for (const ahead of evenings) await addStation(db, { zone: 'UTC', publishAt: new Date(start.getTime() + ahead * minute).toISOString().slice(11, 16) })
    const servers = await Promise.all([startServer(options), startServer(options)])
    try {
      for (let step = 1; quick && step <= quick.steps; step++) {
        await shiftClock(db, step * 60 * minute / quick.steps)
        await wait(quick.stepWaitMs)
      }
      if (!quick) await wait(60 * minute)
      await waitUntilPublished(db, 60_000)
      await expectEachPublishedOnce(db, tables)
      await expect.poll(() => db.$count(slots, sql`kind = 'publish-night'`), { timeout: 20_000 }).toBe(evenings.length)
    }
    finally {
      await Promise.all(servers.map(server => server.stop()))
    }
    return { slots: await db.$count(slots, sql`kind <> 'roll-forward'`), publications: tables, evenings: evenings.length }
  }
  finally {
    await close()
    await made.drop()
  }
}
