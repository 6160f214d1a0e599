import { setTimeout as wait } from 'node:timers/promises'
import { eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { databaseNow, useDatabase } from '../../../server/database/client'
import { mails, receivedMails } from '../../../server/database/schema'
import { stopBoss } from '../../../server/jobs/boss'
import { startWork } from '../../../server/jobs/work'
import type { LocalMailServer } from '../../../server/mail/local-server'
import { startLocalMailServer } from '../../../server/mail/local-server'
import { queueMail } from '../../../server/mail/queue-mail'
import { useLocalMailServer } from '../../../server/mail/transport'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'

// The queue as the server runs it.
let test: TestDatabase
let server: LocalMailServer
const db = () => useDatabase().db

beforeAll(async () => {
  test = await createTestDatabase()
  process.env.DATABASE_URL = test.url
  delete process.env.SMTP_URL
  server = await startLocalMailServer(db())
  useLocalMailServer(1)
  await startWork(db())
})
afterAll(async () => {
  await stopBoss(2000)
  await server.close()
  await useDatabase().close()
  await test.drop()
})

const write = async (name: string) => {
  const now = await databaseNow(db())
  return db().transaction(tx => queueMail({ db: tx, now }, { kind: 'digest', to: { name, address: 'night@ops.example' }, subject: name, text: 'x', html: '<p>x</p>' }))
}
const read = async (id: string) => (await db().select().from(mails).where(eq(mails.id, id)))[0]!
async function until(id: string, holds: (mail: typeof mails.$inferSelect) => boolean) {
  for (let tries = 0; tries < 200 && !holds(await read(id)); tries++) await wait(50)
  return read(id)
}

it('keeps mail while the mail server is away and shows why, then delivers all of it, each once', async () => {
  const first = await write('First')
  expect(await until(first, mail => mail.attempts > 0)).toMatchObject({ state: 'queued', attempts: 1, lastError: expect.stringContaining('ECONNREFUSED') })
  await wait(300)
  const { rows } = await db().execute<{ state: string, seconds: number }>(sql`SELECT state, extract(epoch FROM start_after - now())::int AS seconds FROM pgboss.job WHERE data ->> 'mailId' = ${first}`)
  expect(rows[0]!.state).toBe('retry')
  expect(rows[0]!.seconds).toBeGreaterThan(40)
  expect(rows[0]!.seconds).toBeLessThanOrEqual(61)

  useLocalMailServer(server.port)
  await db().execute(sql`UPDATE pgboss.job SET start_after = now() WHERE state = 'retry'`)
  const others = await Promise.all(Array.from({ length: 12 }, (_, index) => write(`Later ${index}`)))
  for (const id of [first, ...others]) expect(await until(id, mail => mail.state === 'sent')).toMatchObject({ state: 'sent', lastError: null })
  const received = (await db().select().from(receivedMails)).map(({ messageId }) => messageId)
  expect(new Set(received).size).toBe(13)
  expect(received).toHaveLength(13)
})
