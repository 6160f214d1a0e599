import type { ElementReading } from '#shared/formats/elements/read-elements'
import { readElements as read } from '#shared/formats/elements/read-elements'

/** Reads a large upload of element sets. */
export function readElements({ original, nowMs }: { original: Uint8Array, nowMs: number }): ElementReading {
  return read(original, { nowMs })
}
