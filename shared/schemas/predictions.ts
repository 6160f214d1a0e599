import { z } from 'zod'
import { instantOut } from './common'

/** Passes and tables that wait to be computed, in pieces of one spacecraft at one station. */
export const progressOut = z.object({
  left: z.int().min(0),
  /** Those left and those finished since the oldest of them was asked for. */
  total: z.int().min(0),
  /** When a piece was last finished, of those the queue remembers. */
  finishedAt: instantOut.nullable(),
})
