import type { H3Event } from 'h3'
import { setResponseHeaders } from 'h3'
import type { Access } from '#shared/routes'
import { useDatabase } from '~~/server/database/client'
import { lifecycle } from '~~/server/domain/schedule/lifecycle'
import { authenticate, authorise } from './authenticate'
import { describeError } from './describe-error'
import { log } from './log'

const heartbeatMs = 15_000
const lookEveryMs = 500
/** A browser opens the stream anew by itself. */
const longestMs = 15 * 60_000

/**
 * Server-sent events (WHATWG HTML, 9.2) of one name, until the source ends, the listener leaves, the server stops, or who
 * listens may no longer: a session or key is asked for again with every heartbeat. What the source throws before its first
 * event is answered as a problem.
 */
export async function serveEvents<T>(event: H3Event, { name, access, source }: { name: string, access: Access, source: (signal: AbortSignal) => AsyncGenerator<T> }): Promise<undefined> {
  const left = new AbortController()
  const events = source(left.signal)
  const first = await events.next()
  setResponseHeaders(event, { 'content-type': 'text/event-stream; charset=utf-8', 'x-accel-buffering': 'no' })
  const { res } = event.node
  const write = (text: string) => { if (!res.writableEnded && !res.destroyed) res.write(text) }
  res.once('close', () => left.abort())
  const began = performance.now()
  let beatAt = began
  const looking = setInterval(() => {
    if (lifecycle.stopping || performance.now() - began > longestMs) return left.abort()
    if (performance.now() - beatAt < heartbeatMs) return
    beatAt = performance.now()
    write(': still here\n\n')
    stillMay(event, access).catch(() => left.abort())
  }, lookEveryMs)
  try {
    for (let next = first; !next.done; next = await events.next()) write(`event: ${name}\ndata: ${JSON.stringify(next.value)}\n\n`)
  }
  catch (error) {
    log.warn({ requestId: event.context.requestId, error: describeError(error) }, 'a stream of events broke off')
  }
  finally {
    clearInterval(looking)
    res.end()
  }
}

async function stillMay(event: H3Event, access: Access): Promise<void> {
  const { actor } = await authenticate(event, useDatabase().db)
  authorise(access, actor)
}
