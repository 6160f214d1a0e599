import type { IncomingHttpHeaders, IncomingMessage, ServerResponse } from 'node:http'
import { createServer } from 'node:http'
import type { AddressInfo } from 'node:net'

export interface Received { method: string, path: string, headers: IncomingHttpHeaders, body: string, at: number }
export interface HttpReceiver {
  url: string
  port: number
  received: Received[]
  /** How the next calls are answered. */
  behave: (how: (response: ServerResponse, request: IncomingMessage) => void) => void
  close: () => Promise<void>
}

/** Somebody else's HTTP server: takes what comes and answers as told, 204 unless told otherwise. */
export async function startHttpReceiver(): Promise<HttpReceiver> {
  const received: Received[] = []
  let behaviour = (response: ServerResponse, _request: IncomingMessage): void => void response.writeHead(204).end()
  const server = createServer((request, response) => {
    const chunks: Buffer[] = []
    request.on('data', chunk => chunks.push(chunk)).on('end', () => {
      received.push({ method: request.method!, path: request.url!, headers: request.headers, body: Buffer.concat(chunks).toString('utf8'), at: Date.now() })
      behaviour(response, request)
    })
  })
  await new Promise<void>(resolve => server.listen(0, '127.0.0.1', resolve))
  const { port } = server.address() as AddressInfo
  return {
    url: `http://127.0.0.1:${port}`, port, received,
    behave: (how) => { behaviour = how },
    close: async () => {
      server.closeAllConnections()
      await new Promise(resolve => server.close(resolve))
    },
  }
}
