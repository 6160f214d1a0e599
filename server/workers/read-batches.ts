import { MessageChannel } from 'node:worker_threads'
import { decodeText } from '#shared/formats/elements/decode-text'
import type { ReadingEnd } from '#shared/formats/elements/read-elements'
import { hasThreads, runTask } from './pool'
import type { Batch, BatchOptions } from './tasks/batch'
import { makeBatches } from './tasks/batch'
import type { FromReading } from './tasks/read-upload'

export interface BatchReading extends BatchOptions {
  /** The original, part by part. */
  readonly parts: AsyncIterable<Uint8Array>
  readonly totalBytes: number
}

/**
 * Reads an upload and hands it over batch by batch, ready for the database; the answer is how the reading ended. A large
 * one is read in a thread, which waits when it is some batches ahead: neither side ever holds the whole as sets. Left
 * before its end, it stops the thread's reading.
 */
export async function* readInBatches({ parts, totalBytes, ...options }: BatchReading, inThread: boolean): AsyncGenerator<Batch, ReadingEnd> {
  if (!inThread || !hasThreads()) return yield* readHere(parts, totalBytes, options)
  const { port1: port, port2 } = new MessageChannel()
  const ahead = new Int32Array(new SharedArrayBuffer(8))
  const waiting: FromReading[] = []
  const failure: { error: unknown }[] = []
  let wake = () => {}
  port.on('message', (message: FromReading) => {
    waiting.push(message)
    wake()
  })
  const task = runTask('read-upload', { port: port2, ahead, totalBytes, ...options }, { transferList: [port2] }).catch((error: unknown) => {
    failure.push({ error })
    wake()
  })
  try {
    for await (const part of parts) {
      if (failure.length > 0) break
      // A copy: what is a view of the driver's buffer cannot change hands.
      const bytes = new Uint8Array(part)
      port.postMessage(bytes, [bytes.buffer])
    }
    port.postMessage(null)
    for (;;) {
      const message = waiting.shift()
      if (message?.kind === 'end') return message.end
      if (message) {
        yield message.batch
        Atomics.sub(ahead, 0, 1)
        Atomics.notify(ahead, 0)
      }
      else if (failure.length > 0) throw failure[0]!.error
      else await new Promise<void>((resolve) => { wake = resolve })
    }
  }
  finally {
    // The sign to stop, to a thread that may be waiting to hand over more.
    Atomics.store(ahead, 1, 1)
    Atomics.store(ahead, 0, 0)
    Atomics.notify(ahead, 0)
    port.close()
    await task
  }
}

async function* readHere(parts: AsyncIterable<Uint8Array>, totalBytes: number, options: BatchOptions): AsyncGenerator<Batch, ReadingEnd> {
  const bytes = new Uint8Array(totalBytes)
  let at = 0
  for await (const part of parts) {
    bytes.set(part, at)
    at += part.length
  }
  const batches: Batch[] = []
  const end = makeBatches(decodeText(bytes), options, (batch) => { batches.push(batch) })
  yield* batches
  return end
}
