import type { MessagePort } from 'node:worker_threads'
import { decodeText } from '#shared/formats/elements/decode-text'
import type { ReadingEnd } from '#shared/formats/elements/read-elements'
import type { Batch, BatchOptions } from './batch'
import { makeBatches } from './batch'

export interface ReadUploadInput extends BatchOptions {
  /** Parts come in by it, then null; batches go out. */
  readonly port: MessagePort
  /** [how many batches are handed over and not yet taken, 1 to stop] */
  readonly ahead: Int32Array<SharedArrayBuffer>
  readonly totalBytes: number
}

/** What comes out of the port: batches in order, and last of all how it ended. */
export type FromReading = { readonly kind: 'batch', readonly batch: Batch } | { readonly kind: 'end', readonly end: ReadingEnd }

/** So many batches may wait to be stored. */
const aheadAtMost = 2

/** Reads a large upload in a worker thread, never more than a few batches ahead of the one that stores them. */
export async function readUpload({ port, ahead, totalBytes, ...options }: ReadUploadInput): Promise<void> {
  try {
    // The bytes are not kept beside the text.
    const end = makeBatches(decodeText(await collect(port, totalBytes)), options, (batch) => {
      for (let count = Atomics.load(ahead, 0); count >= aheadAtMost; count = Atomics.load(ahead, 0)) Atomics.wait(ahead, 0, count)
      if (Atomics.load(ahead, 1) === 1) throw new Error('The reading was stopped.')
      Atomics.add(ahead, 0, 1)
      port.postMessage({ kind: 'batch', batch } satisfies FromReading, [batch.sets.buffer, batch.notes.buffer, batch.matched.buffer])
    })
    port.postMessage({ kind: 'end', end } satisfies FromReading)
  }
  finally {
    port.close()
  }
}

/** The parts as one; a port that closes before the last of them ends the reading. */
async function collect(port: MessagePort, totalBytes: number): Promise<Uint8Array> {
  const bytes = new Uint8Array(totalBytes)
  let at = 0
  try {
    await new Promise<void>((resolve, reject) => {
      port.on('message', (part: Uint8Array | null) => {
        if (part === null) return resolve()
        bytes.set(part, at)
        at += part.length
      })
      port.once('close', () => reject(new Error('The upload was not handed over whole.')))
    })
    return bytes
  }
  finally {
    // Listeners would keep the bytes as long as the port.
    port.removeAllListeners()
  }
}
