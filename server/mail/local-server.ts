import type { AddressInfo } from 'node:net'
import type { AddressObject } from 'mailparser'
import { simpleParser } from 'mailparser'
import { SMTPServer } from 'smtp-server'
import type { Db } from '~~/server/database/client'
import { receivedMails } from '~~/server/database/schema'

export interface LocalMailServer { port: number, close(): Promise<void> }

/** Stands in for a mail server while SMTP_URL is unset: takes mail on loopback and keeps it for reading. */
export async function startLocalMailServer(db: Db): Promise<LocalMailServer> {
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['AUTH', 'STARTTLS'],
    size: 5 * 1024 * 1024,
    onData: (stream, session, done) => {
      keep(db, stream, session.envelope.rcptTo.map(({ address }) => address)).then(() => done(), done)
    },
  })
  // A client that goes away in the middle is its own affair; without a listener it would end the process.
  server.on('error', () => {})
  await new Promise<void>((resolve, reject) => {
    server.server.once('error', reject)
    server.listen(0, '127.0.0.1', resolve)
  })
  return {
    port: (server.server.address() as AddressInfo).port,
    close: () => new Promise(resolve => server.close(resolve)),
  }
}

async function keep(db: Db, stream: NodeJS.ReadableStream, recipients: string[]): Promise<void> {
  const mail = await simpleParser(stream as Parameters<typeof simpleParser>[0] & NodeJS.ReadableStream, { skipImageLinks: true, skipTextLinks: true })
  await db.insert(receivedMails).values({
    messageId: mail.messageId ?? '',
    fromAddress: (mail.from as AddressObject | undefined)?.text ?? '',
    toAddresses: recipients,
    subject: mail.subject ?? '',
    text: mail.text ?? '',
    html: mail.html || null,
  })
}
