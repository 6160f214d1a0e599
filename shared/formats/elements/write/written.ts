import type { MeanElements } from '../../../physics/types'

export const ELEMENT_NOTATIONS = ['tle', 'kvn', 'xml', 'json', 'csv'] as const
export type ElementNotation = typeof ELEMENT_NOTATIONS[number]

/** What stands in the header of a message; said by the caller, never read from a clock. */
export interface MessageOrigin {
  /** Milliseconds since 1970, UTC. */
  readonly createdMs: number
  readonly originator: string
}

export type WrittenElements =
  | {
    readonly ok: true
    readonly text: string
    /** Keywords whose value the notation could not carry to the last digit; empty for every OMM. */
    readonly changed: readonly string[]
  }
  | { readonly ok: false, readonly reason: string }

/** What a set is called where it has no name: by its number, or by its designator. */
export const labelOf = (e: MeanElements): string => e.name ?? e.catalogueNumber ?? e.designator ?? 'the set'
