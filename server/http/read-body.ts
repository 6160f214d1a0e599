import { IncomingMessage } from 'node:http'
import type { H3Event } from 'h3'
import { getRequestHeader } from 'h3'
import { DomainError } from '~~/server/domain/errors'

const defaultLimit = 256 * 1024

/** Reads the body while counting: what is larger than its limit is refused before it is held. */
export async function readLimited(event: H3Event, limit = defaultLimit): Promise<Buffer> {
  const tooLarge = () => new DomainError('too-large', `At most ${limit.toLocaleString('en-GB')} bytes are read here: send less, or in parts.`)
  const declared = Number(getRequestHeader(event, 'content-length') ?? 0)
  if (declared > limit) throw tooLarge()
  const held = (event.node.req as { body?: unknown }).body
  if (held !== undefined) return heldBody(held, limit, tooLarge)
  return event.node.req instanceof IncomingMessage ? collect(event.node.req, limit, tooLarge) : Buffer.alloc(0)
}

/** What comes beyond the limit is read and dropped: left in the connection it would stand before the next request. */
function collect(request: IncomingMessage, limit: number, tooLarge: () => DomainError): Promise<Buffer> {
  return new Promise((resolve, reject) => {
    let chunks: Buffer[] = []
    let size = 0
    request.on('data', (chunk: Buffer) => {
      size += chunk.length
      if (size <= limit) return chunks.push(chunk)
      chunks = []
      reject(tooLarge())
    })
    request.once('end', () => resolve(Buffer.concat(chunks)))
    request.once('close', () => reject(new DomainError('unreadable', 'The request was broken off before its body was whole.')))
    request.once('error', reject)
  })
}

/** A request made inside the server (page rendering) carries its body ready-made. */
function heldBody(held: unknown, limit: number, tooLarge: () => DomainError): Buffer {
  const bytes = Buffer.isBuffer(held) ? held : Buffer.from(typeof held === 'string' ? held : JSON.stringify(held))
  if (bytes.length > limit) throw tooLarge()
  return bytes
}

export function contentType(event: H3Event): string {
  return (getRequestHeader(event, 'content-type') ?? '').split(';', 1)[0]!.trim().toLowerCase()
}

/** A JSON body; undefined when there is none. */
export async function readJson(event: H3Event, limit?: number): Promise<unknown> {
  const bytes = await readLimited(event, limit)
  if (bytes.length === 0) return undefined
  if (contentType(event) !== 'application/json') throw new DomainError('wrong-type', 'Send the body as application/json.')
  try {
    return JSON.parse(new TextDecoder('utf-8', { fatal: true }).decode(bytes))
  }
  catch (error) {
    throw new DomainError('unreadable', `The body is not valid JSON: ${(error as Error).message}.`)
  }
}
