const DEEPEST = 64

const isPlainObject = (value: object): value is Record<string, unknown> => {
  const prototype: unknown = Object.getPrototypeOf(value)
  return prototype === Object.prototype || prototype === null
}

/** JSON.stringify escapes a well-formed string exactly as RFC 8785 §3.2.2.2 asks; half a surrogate pair is no Unicode. */
function text(value: string, path: string): string {
  for (let i = 0; i < value.length; i++) {
    const code = value.charCodeAt(i)
    if (code < 0xD800 || code > 0xDFFF) continue
    const next = value.charCodeAt(i + 1)
    if (code > 0xDBFF || !(next >= 0xDC00 && next <= 0xDFFF)) throw new TypeError(`Canonical JSON cannot hold half a surrogate pair: clean the text at ${path}.`)
    i++
  }
  return JSON.stringify(value)
}

function write(value: unknown, path: string, depth: number): string {
  if (depth > DEEPEST) throw new TypeError(`Canonical JSON is written at most ${DEEPEST} levels deep: ${path} is deeper, or holds itself.`)
  if (value === null || typeof value === 'boolean') return String(value)
  if (typeof value === 'string') return text(value, path)
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new TypeError(`Canonical JSON cannot hold ${value}: give a finite number at ${path}.`)
    return String(value)
  }
  if (Array.isArray(value)) return `[${Array.from(value, (item, i) => write(item, `${path}[${i}]`, depth + 1)).join(',')}]`
  if (typeof value === 'object' && isPlainObject(value)) {
    // The default order of sort() is by UTF-16 code units, which is what RFC 8785 §3.2.3 prescribes.
    const members = Object.keys(value).sort().map(key => `${text(key, path)}:${write(value[key], `${path}.${key}`, depth + 1)}`)
    return `{${members.join(',')}}`
  }
  throw new TypeError(`Canonical JSON holds null, booleans, numbers, texts, arrays and plain objects: ${path} is ${value === undefined ? 'undefined' : `a ${typeof value === 'object' ? value?.constructor?.name ?? 'class' : typeof value}`}.`)
}

/**
 * JSON in the one form of RFC 8785: members sorted by UTF-16 code units, no blanks, numbers as ECMAScript writes them
 * (−0 as 0), minimal escapes.
 * @throws TypeError for NaN, Infinity, undefined, half a surrogate pair, dates and other classes, more than 64 levels
 */
export function canonicalJson(value: unknown): string {
  return write(value, '$', 0)
}

/** The UTF-8 bytes of `canonicalJson`, as they are digested and signed. */
export function canonicalJsonBytes(value: unknown): Uint8Array {
  return new TextEncoder().encode(canonicalJson(value))
}
