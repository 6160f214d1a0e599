import type { AddressInfo, Socket } from 'node:net'
import { createServer } from 'node:net'
import { SMTPServer } from 'smtp-server'

export interface FakeMailServer {
  url: string
  /** What was taken, whole, as it came over the line. */
  received: string[]
  /** Whom each of them was for, by the envelope. */
  recipients: string[][]
  /** How the next mails are answered: a reply code, nothing at all, or a torn connection; null takes them. */
  behave: (how: number | 'hang' | 'reset' | null) => void
  close: () => Promise<void>
}

/** A mail server that misbehaves on demand. */
export async function startFakeMailServer(): Promise<FakeMailServer> {
  let behaviour: number | 'hang' | 'reset' | null = null
  const received: string[] = []
  const recipients: string[][] = []
  const sockets = new Set<Socket>()
  const smtp = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS'],
    onRcptTo: (_address, _session, done) => {
      if (typeof behaviour !== 'number') return done()
      done(Object.assign(new Error(behaviour < 500 ? 'try again later' : 'no such mailbox'), { responseCode: behaviour }))
    },
    onData: (stream, session, done) => {
      const chunks: Buffer[] = []
      stream.on('data', chunk => chunks.push(chunk)).on('end', () => {
        received.push(Buffer.concat(chunks).toString('utf8'))
        recipients.push(session.envelope.rcptTo.map(({ address }) => address))
        done()
      })
    },
  })
  smtp.on('error', () => {})
  const front = createServer((socket) => {
    sockets.add(socket.on('error', () => {}))
    if (behaviour === 'reset') socket.resetAndDestroy()
    else if (behaviour !== 'hang') smtp.server.emit('connection', socket)
  })
  await new Promise<void>(resolve => front.listen(0, '127.0.0.1', resolve))
  return {
    url: `smtp://127.0.0.1:${(front.address() as AddressInfo).port}`,
    received,
    recipients,
    behave: (how) => { behaviour = how },
    close: async () => {
      for (const socket of sockets) socket.destroy()
      await new Promise(resolve => front.close(resolve))
    },
  }
}
