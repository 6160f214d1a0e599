import { Readable } from 'node:stream'
import { pipeline } from 'node:stream/promises'
import type { H3Event } from 'h3'
import { setResponseHeaders } from 'h3'

/** A CSV file to save, sent as it is made: no faster than it is taken, never held whole. One that breaks off ends the connection, so that half a file does not look like a whole one. */
export async function serveCsv(event: H3Event, fileName: string, pieces: AsyncIterable<string>): Promise<undefined> {
  setResponseHeaders(event, { 'content-type': 'text/csv; charset=utf-8', 'content-disposition': `attachment; filename="${fileName}"` })
  await pipeline(Readable.from(pieces), event.node.res).catch(() => event.node.res.destroy())
}
