import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { eq, sql } from 'drizzle-orm'
import type { Database } from '../../../server/database/client'
import { openDatabase } from '../../../server/database/client'
import { mails, receivedMails } from '../../../server/database/schema'
import { startLocalMailServer } from '../../../server/mail/local-server'
import { queueMail } from '../../../server/mail/queue-mail'
import { sendMail } from '../../../server/mail/send-mail'
import { openTransport } from '../../../server/mail/transport'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'
import type { FakeMailServer } from '../../support/smtp'
import { startFakeMailServer } from '../../support/smtp'

// The reply codes and what they ask of the sender: RFC 5321, sections 4.2.1 and 4.2.3.
let test: TestDatabase
let database: Database
let server: FakeMailServer
const now = new Date('2026-12-01T12:00:00.000Z')
const letter = { kind: 'digest' as const, subject: 'Tonight', text: 'Twelve passes.', html: '<p>Twelve passes.</p>' }

beforeAll(async () => {
  test = await createTestDatabase()
  database = openDatabase(test.url)
  server = await startFakeMailServer()
})
afterAll(async () => {
  await server?.close()
  await database?.close()
  await test?.drop()
})
beforeEach(() => {
  server.behave(null)
  server.received.length = 0
  server.recipients.length = 0
})

const write = (address = 'night@ops.example', name = 'Night desk') => database.db.transaction(tx => queueMail({ db: tx, now }, { ...letter, to: { name, address } }))
const send = (id: string, lastTry = false) => sendMail({ db: database.db, now }, id, { transport: openTransport(server.url, { timeoutMs: 400 }), lastTry })
const read = async (id: string) => (await database.db.select().from(mails).where(eq(mails.id, id)))[0]!

describe('queueing a mail', () => {
  it('asks for its delivery in the transaction that writes it, and in no other', async () => {
    const jobs = async (id: string) => (await database.db.execute(sql`SELECT 1 FROM pgboss.job WHERE name = 'mail' AND data ->> 'mailId' = ${id}`)).rows.length
    const id = await write()
    expect(await jobs(id)).toBe(1)
    let lost = ''
    await expect(database.db.transaction(async (tx) => {
      lost = await queueMail({ db: tx, now }, { ...letter, to: { name: 'x', address: 'x@ops.example' } })
      throw new Error('undone')
    })).rejects.toThrow('undone')
    expect(await jobs(lost)).toBe(0)
    expect(await read(lost)).toBeUndefined()
  })
})

describe('sending a mail', () => {
  it('sends it once, and not again when the job comes twice', async () => {
    const id = await write()
    await send(id)
    await send(id)
    expect(server.received).toHaveLength(1)
    expect(await read(id)).toMatchObject({ state: 'sent', attempts: 1, lastError: null, sentAt: now })
  })

  it('keeps a mail that is refused for the moment (450) and sends it under the same Message-ID later', async () => {
    const id = await write()
    server.behave(450)
    await expect(send(id)).rejects.toThrow('try again later')
    expect(await read(id)).toMatchObject({ state: 'queued', attempts: 1, lastError: expect.stringContaining('450') })
    server.behave(null)
    await send(id)
    const mail = await read(id)
    expect(mail).toMatchObject({ state: 'sent', attempts: 2, lastError: null })
    expect(server.received[0]).toContain(`Message-ID: ${mail.messageId}`)
  })

  it('gives a mail up at once that is refused for good (550), and says why', async () => {
    const id = await write()
    server.behave(550)
    await send(id)
    expect(await read(id)).toMatchObject({ state: 'failed', attempts: 1, lastError: expect.stringContaining('no such mailbox'), sentAt: null })
    server.behave(null)
    await send(id)
    expect(server.received).toHaveLength(0)
  })

  it.each(['hang', 'reset'] as const)('keeps a mail when the server answers with a %s, within the time it is given', async (how) => {
    const id = await write()
    server.behave(how)
    const begun = performance.now()
    await expect(send(id)).rejects.toThrow()
    expect(performance.now() - begun).toBeLessThan(3000)
    expect(await read(id)).toMatchObject({ state: 'queued', attempts: 1, lastError: expect.stringMatching(/.+/) })
  })

  it('counts a mail as failed when its last try fails', async () => {
    const id = await write()
    server.behave(451)
    await send(id, true)
    expect(await read(id)).toMatchObject({ state: 'failed', lastError: expect.stringContaining('451') })
  })

  it('writes to one recipient although the name holds a comma and another address', async () => {
    const id = await write('one@ops.example', 'two@ops.example, Night')
    await send(id)
    expect(server.recipients).toEqual([['one@ops.example']])
  })
})

describe('the local mail server', () => {
  it('keeps what it receives, with words and recipients, for reading', async () => {
    const local = await startLocalMailServer(database.db)
    try {
      const id = await database.db.transaction(tx => queueMail({ db: tx, now }, { ...letter, subject: 'Überflug – 12 × 9600 Bd', to: { name: 'Night', address: 'night@ops.example' } }))
      await sendMail({ db: database.db, now }, id, { transport: openTransport(`smtp://127.0.0.1:${local.port}?ignoreTLS=true`) })
      const [got] = await database.db.select().from(receivedMails)
      expect(got).toMatchObject({ subject: 'Überflug – 12 × 9600 Bd', toAddresses: ['night@ops.example'], messageId: (await read(id)).messageId, text: expect.stringContaining('Twelve passes.'), html: expect.stringContaining('<p>Twelve passes.</p>') })
    }
    finally {
      await local.close()
    }
  })
})
