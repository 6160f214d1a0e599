import { and, eq } from 'drizzle-orm'
import type { Db } from '~~/server/database/client'
import { elementUploadParts } from '~~/server/database/schema'

/** What was sent is kept in parts of this size: one is held at a time, however large the whole. */
export const partBytes = 1024 * 1024

/** The original of an upload, part by part. */
export async function* originalOf(db: Pick<Db, 'select'>, uploadId: string): AsyncGenerator<Buffer> {
  for (let number = 0; ; number++) {
    const [part] = await db.select({ bytes: elementUploadParts.bytes }).from(elementUploadParts).where(and(eq(elementUploadParts.uploadId, uploadId), eq(elementUploadParts.number, number)))
    if (!part) return
    yield part.bytes
  }
}

/** Puts pieces of any size together into parts of one size; the last is what is left. */
export async function* inParts(pieces: AsyncIterable<Uint8Array> | Iterable<Uint8Array>): AsyncGenerator<Buffer> {
  let held: Uint8Array[] = []
  let size = 0
  for await (const piece of pieces) {
    let rest = piece
    while (size + rest.length >= partBytes) {
      const taken = partBytes - size
      held.push(rest.subarray(0, taken))
      yield Buffer.concat(held)
      rest = rest.subarray(taken)
      ;[held, size] = [[], 0]
    }
    // An empty piece, or one cut on a part's edge, adds nothing.
    if (rest.length > 0) held.push(rest)
    size += rest.length
  }
  if (size > 0) yield Buffer.concat(held)
}
