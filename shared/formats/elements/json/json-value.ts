/** A JSON value with its place in the text; numbers keep their text, objects every member, repeated ones too. */
export type JsonValue = JsonScalar | JsonArray | JsonObject

interface Placed { readonly line: number, readonly start: number, end: number }

export type JsonScalar = Placed & (
  | { readonly kind: 'null' }
  | { readonly kind: 'boolean', readonly value: boolean }
  | { readonly kind: 'number', readonly text: string }
  | { readonly kind: 'string', readonly value: string }
)
export interface JsonArray extends Placed { readonly kind: 'array', readonly items: JsonValue[] }
export interface JsonMember { readonly key: string, readonly line: number, readonly value: JsonValue }
export interface JsonObject extends Placed { readonly kind: 'object', readonly members: JsonMember[] }

export interface JsonLimits {
  /** Containers inside one another. */
  readonly depth: number
  /** Members of one object, or items of one array below the outermost. */
  readonly members: number
  /** Characters of one string or number. */
  readonly characters: number
}

/** Why a text is not JSON, or is beyond a limit, and where. */
export class JsonError extends Error {
  constructor(readonly line: number, readonly column: number, readonly code: 'json' | 'json-limit', message: string) {
    super(message)
    this.name = 'JsonError'
  }
}
