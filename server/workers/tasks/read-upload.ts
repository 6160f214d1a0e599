import type { MessagePort } from 'node:worker_threads'
import type { DecodedText } from '#shared/formats/elements/decode-text'
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
    const end = makeBatches(await collectText(port, totalBytes), options, (batch) => {
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

/**
 * The parts as one text; a port that closes before the last of them ends the reading. The bytes are let go of here: a
 * caller's frame would hold them as long as it reads.
 */
function collectText(port: MessagePort, totalBytes: number): Promise<DecodedText> {
  return new Promise((resolve, reject) => {
    let bytes = new Uint8Array(totalBytes)
    let at = 0
    port.on('message', (part: Uint8Array | null) => {
      if (part === null) {
        resolve(decodeText(bytes))
        bytes = new Uint8Array(0)
        return
      }
      bytes.set(part, at)
      at += part.length
    })
    port.once('close', () => reject(new Error('The upload was not handed over whole.')))
  })
}
