import { spawn } from 'node:child_process'
import { join } from 'node:path'
import { sql } from 'drizzle-orm'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { root } from '../../server/cli/lib/paths.mjs'
import { boundToParent, stopChild } from '../../server/cli/lib/processes.mjs'
import type { Database } from '../../server/database/client'
import { databaseNow, openDatabase } from '../../server/database/client'
import { servers, tables } from '../../server/database/schema'
import { requestRefresh } from '../../server/domain/prediction/request-refresh'
import { queueMail } from '../../server/mail/queue-mail'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import { addSpacecraft, addStation } from '../support/fixtures'

let made: TestDatabase
let database: Database
beforeAll(async () => {
  made = await createTestDatabase()
  database = openDatabase(made.url, { max: 2 })
})
afterAll(async () => {
  await database?.close()
  await made?.drop()
})

it('workers beside no server compute what waits, leave mail alone, say that they live, and end when asked', { timeout: 180_000 }, async () => {
  const { db } = database
  const now = await databaseNow(db)
  await addStation(db)
  await addSpacecraft(db, now)
  await addSpacecraft(db, now)
  const [program, args] = boundToParent('KILL', process.execPath, [join(root, 'server/cli/worker.mjs')])
  const workers = [1, 2].map(() => spawn(program, args, { cwd: root, stdio: 'ignore', env: { PATH: process.env.PATH, DATABASE_URL: made.url, NULLBEAT_TEST: '1' } }))
  const codes = workers.map(worker => new Promise<number | null>(resolve => worker.once('exit', code => resolve(code))))
  try {
    await db.transaction(async (tx) => {
      await requestRefresh({ db: tx }, { reason: 'A test asks.' })
      await queueMail({ db: tx, now }, { kind: 'digest', to: { name: 'A', address: 'a@ops.example' }, subject: 'x', text: 'x', html: '<p>x</p>' })
    })
    const states = async (name: string) => (await db.execute<{ state: string }>(sql`SELECT state::text FROM pgboss.job WHERE name = ${name}`)).rows.map(row => row.state)
    await expect.poll(() => states('predict'), { timeout: 40_000, interval: 200 }).toEqual(['completed', 'completed'])
    expect(await db.$count(tables)).toBeGreaterThan(0)
    expect(await states('mail')).toEqual(['created'])
    await expect.poll(async () => (await db.select().from(servers)).map(({ role, stoppedAt }) => [role, stoppedAt]), { timeout: 10_000 }).toEqual([['worker', null], ['worker', null]])
  }
  finally {
    await Promise.all(workers.map(worker => stopChild(worker, 'SIGTERM', 10_000)))
  }
  expect(await Promise.all(codes)).toEqual([0, 0])
  expect((await db.select().from(servers)).filter(({ stoppedAt }) => stoppedAt === null)).toEqual([])
})
