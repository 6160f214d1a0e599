import type { MeanElements } from '../../physics/types'

/** A remark on one line of an upload; `message` says field, value, rule and how to mend it. */
export interface LineNote {
  /** 1-based; CR, LF and CRLF each end a line. */
  readonly line: number
  /** The set's name, where known. */
  readonly name?: string
  readonly code: string
  readonly message: string
}

export interface ReadSet {
  /** Where the set begins: line 1 of a TLE, the opening brace of an OMM object. */
  readonly line: number
  readonly elements: MeanElements
  /** The set as it stood in the upload, decoded, its name line included. */
  readonly text: string
  /** Equal for two sets that predict the same motion of the same object, whatever the notation. */
  readonly contentKey: string
  /** Warnings that concern this set; they stand in the reading's list as well. */
  readonly warnings: readonly LineNote[]
}

export type ElementFormat = 'tle' | 'omm-kvn' | 'omm-xml' | 'omm-json' | 'omm-csv'

export type ElementReading =
  | {
    readonly kind: 'read'
    readonly format: ElementFormat
    readonly sets: readonly ReadSet[]
    /** One for each set that was not taken. */
    readonly refusals: readonly LineNote[]
    readonly warnings: readonly LineNote[]
    /** Sets that stood in the upload before; each is in `warnings` too. */
    readonly repeated: number
  }
  | { readonly kind: 'refused', readonly detail: string, readonly errors: readonly LineNote[] }

/** Where a reader's findings go, one by one, in the order of the file: into lists, or on in batches. */
export interface SetSink {
  set(set: ReadSet): void
  refusal(note: LineNote): void
  warning(note: LineNote): void
}

/** How a reading ended, when its findings have gone to a sink. */
export type ReadingEnd =
  | { readonly kind: 'read', readonly format: ElementFormat, readonly sets: number, readonly refusals: number, readonly repeated: number }
  /** Nothing of the file may be taken, whatever went to the sink before; `errors` null: every set was refused, and the sink has the reasons. */
  | { readonly kind: 'refused', readonly detail: string, readonly errors: readonly LineNote[] | null }

/** Thrown while one set is read; ends that set only. */
export class SetRefusal extends Error {
  constructor(readonly line: number, readonly code: string, message: string) {
    super(message)
    this.name = 'SetRefusal'
  }
}

/** Thrown by a reader when the file as a whole is not what it looks like; `message` says how to mend it. */
export class FileRefusal extends Error {
  constructor(readonly line: number, readonly code: string, message: string) {
    super(message)
    this.name = 'FileRefusal'
  }
}

/** Collects the warnings of the set being read. */
export type Warn = (line: number, code: string, message: string) => void

/** A whole upload refused for one reason. */
export function refusedWhole(line: number, code: string, message: string): { readonly kind: 'refused', readonly detail: string, readonly errors: readonly LineNote[] } {
  return { kind: 'refused', detail: message, errors: [{ line, code, message }] }
}
