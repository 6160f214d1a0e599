import { sql } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import type { Database } from '../../../server/database/client'
import { openDatabase } from '../../../server/database/client'
import { requestRefresh } from '../../../server/domain/prediction/request-refresh'
import { openBossDatabase } from '../../../server/jobs/boss-database'
import { onSent } from '../../../server/jobs/queue'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'
import { addSpacecraft, addStation } from '../../support/fixtures'
import { emptyQueue } from '../../support/queued-jobs'

// One waiting job a key, no lost wake-up, what a person waits for first: common practice of work queues.
let test: TestDatabase
let database: Database
let spacecraftId: string
beforeAll(async () => {
  test = await createTestDatabase()
  database = openDatabase(test.url)
  await addStation(database.db)
  await addSpacecraft(database.db, new Date())
  spacecraftId = (await addSpacecraft(database.db, new Date())).id
})
afterAll(async () => {
  await database.close()
  await test.drop()
})
beforeEach(() => emptyQueue(database.db))

const ask = (request: Parameters<typeof requestRefresh>[1], db = database.db) => requestRefresh({ db }, request)
const next = async () => (await database.db.execute<{ reason: string }>(sql`
  SELECT data ->> 'reason' AS reason FROM pgboss.job WHERE state = 'created' ORDER BY priority DESC, created_on, id LIMIT 1 FOR UPDATE SKIP LOCKED`)).rows[0]?.reason
const waiting = async () => (await database.db.execute<{ reason: string }>(sql`SELECT data ->> 'reason' AS reason FROM pgboss.job ORDER BY data ->> 'reason'`)).rows.map(row => row.reason)

describe('a computation that is asked for', () => {
  it('goes before those that roll on when somebody has changed its spacecraft, and says that reason, though it waited already', async () => {
    await ask({ reason: 'rolls on' })
    expect(await next()).toBe('rolls on')
    await ask({ spacecraftIds: [spacecraftId], reason: 'a link changed' })
    expect(await next()).toBe('a link changed')
    await ask({ reason: 'rolls on again' })
    expect(await waiting()).toEqual(['a link changed', 'rolls on again'])
  })

  it('is not taken before the change that asks for it stands, though it waited already', async () => {
    await ask({ spacecraftIds: [spacecraftId], reason: 'first' })
    await database.db.transaction(async (tx) => {
      await ask({ spacecraftIds: [spacecraftId], reason: 'second' }, tx)
      expect(await next()).toBeUndefined()
    })
    expect(await next()).toBe('second')
  })

  it('waits anew when the one before has been taken', async () => {
    await ask({ spacecraftIds: [spacecraftId], reason: 'first' })
    await database.db.execute(sql`UPDATE pgboss.job SET state = 'active', started_on = now()`)
    await ask({ spacecraftIds: [spacecraftId], reason: 'second' })
    expect(await waiting()).toEqual(['first', 'second'])
  })

  it('is told to who takes such jobs in this process, once for many, a moment after it was asked for', async () => {
    let told = 0
    onSent('predict', () => told++)
    await database.db.transaction(async (tx) => {
      for (const reason of ['one', 'two', 'three']) await ask({ spacecraftIds: [spacecraftId], reason }, tx)
    })
    await expect.poll(() => told, { timeout: 2000, interval: 10 }).toBeGreaterThan(0)
    expect(told).toBeLessThan(4)
    onSent('predict', () => {})
  })
})

it('tries a statement of the queue again when the database has cut its connection, and tells of it once', async () => {
  const told: unknown[] = []
  const own = openBossDatabase(test.url, error => told.push(error))
  const slow = own.executeSql('SELECT pg_sleep(0.3), 7 AS seven', [])
  await expect.poll(async () => (await database.db.execute(sql`SELECT pg_terminate_backend(pid) FROM pg_stat_activity WHERE application_name = 'nullbeat-jobs' AND state = 'active'`)).rows.length).toBe(1)
  expect((await slow).rows[0]).toMatchObject({ seven: 7 })
  expect(told).toHaveLength(1)
  await expect(own.executeSql('SELECT nonsense', [])).rejects.toThrow('nonsense')
  await own.close()
})
