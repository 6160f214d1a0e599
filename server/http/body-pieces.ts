import { IncomingMessage } from 'node:http'
import type { H3Event } from 'h3'
import { getRequestHeader } from 'h3'
import { DomainError } from '~~/server/domain/errors'

/**
 * A request's body as it comes, counted: past its limit it ends with `too-large`. What is not taken of it is read and
 * dropped, since left in the connection it would stand before the next request.
 */
export async function* bodyPieces(event: H3Event, limit: number): AsyncGenerator<Uint8Array> {
  const tooLarge = () => new DomainError('too-large', `At most ${limit.toLocaleString('en-GB')} bytes are read here: send less, or in parts.`)
  const request = event.node.req
  try {
    if (Number(getRequestHeader(event, 'content-length') ?? 0) > limit) throw tooLarge()
    let size = 0
    for await (const piece of piecesOf(request)) {
      size += piece.length
      if (size > limit) throw tooLarge()
      yield piece
    }
  }
  finally {
    request.resume()
  }
}

const brokenOff = () => new DomainError('unreadable', 'The request was broken off before its body was whole.')

async function* piecesOf(request: IncomingMessage): AsyncGenerator<Uint8Array> {
  // A request made inside the server (page rendering) carries its body ready-made.
  const held = (request as { body?: unknown }).body
  if (held !== undefined) yield Buffer.isBuffer(held) ? held : Buffer.from(typeof held === 'string' ? held : JSON.stringify(held))
  else if (request instanceof IncomingMessage) {
    try {
      // Left early it is not destroyed: the answer still goes out by its connection.
      yield* request.iterator({ destroyOnReturn: false }) as AsyncIterable<Buffer>
    }
    catch {
      throw brokenOff()
    }
    if (!request.complete) throw brokenOff()
  }
}
