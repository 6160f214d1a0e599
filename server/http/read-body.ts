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
  const chunks: Buffer[] = []
  let size = 0
  for await (const chunk of event.node.req) {
    size += (chunk as Buffer).length
    if (size > limit) throw tooLarge()
    chunks.push(chunk as Buffer)
  }
  return Buffer.concat(chunks)
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
