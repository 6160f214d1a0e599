import { sql } from 'drizzle-orm'
import { expect } from 'vitest'
import { databaseNow, openDatabase } from '../../server/database/client'
import { mails } from '../../server/database/schema'
import { queueMail } from '../../server/mail/queue-mail'
import { createTestDatabase } from './database'
import { killServers } from './kill-servers'
import { runSeed, seededRandom } from './random'
import { startFakeMailServer } from './smtp'

export interface MailKillFigures { kills: number, mails: number, lost: number, duplicates: number, seconds: number }

/** Kills a server that mails at random moments; what it had taken comes back to the queue, and every mail arrives. */
export async function killWhileMailing(kills: number, perKill: number): Promise<MailKillFigures> {
  const made = await createTestDatabase()
  const { db, close } = openDatabase(made.url, { max: 3 })
  const smtp = await startFakeMailServer()
  const began = performance.now()
  const written: string[] = []
  const write = async () => {
    const now = await databaseNow(db)
    await db.transaction(async (tx) => {
      for (let count = 0; count < perKill; count++) written.push(await queueMail({ db: tx, now }, { kind: 'digest', to: { name: 'Night', address: 'night@ops.example' }, subject: `Mail ${written.length}`, text: 'x', html: '<p>x</p>' }))
    })
  }
  // A killed server's jobs come back when their time limit is over: here that is made to be at once, while no server holds them.
  const giveBack = () => db.execute(sql`UPDATE pgboss.job SET state = 'retry', start_after = now(), retry_count = retry_count + 1 WHERE name = 'mail' AND state IN ('active', 'retry')`)
  try {
    const [server] = await killServers({
      kills, random: seededRandom(runSeed()), withinMs: 4000, servers: 1, options: { databaseUrl: made.url, env: { SMTP_URL: smtp.url, LOG_LEVEL: 'warn' } },
      beforeEach: write, afterKill: async () => void await giveBack(),
    })
    try {
      await expect.poll(() => db.$count(mails, sql`state <> 'sent'`), { timeout: 120_000, interval: 250 }).toBe(0)
    }
    finally {
      await server!.stop()
    }
    const rows = await db.select({ messageId: mails.messageId }).from(mails)
    const arrived = smtp.received.map(text => /^Message-ID: (.+)$/im.exec(text)![1]!)
    return { kills, mails: written.length, lost: rows.filter(({ messageId }) => !arrived.includes(messageId)).length, duplicates: arrived.length - new Set(arrived).size, seconds: Math.round((performance.now() - began) / 1000) }
  }
  finally {
    await smtp.close()
    await close()
    await made.drop()
  }
}
