import type { JsonArray, JsonLimits, JsonObject, JsonValue } from './json-value'
import { JsonScanner } from './scanner'

/** An open container and, in an object, the key whose value is awaited. */
type Open = { readonly container: JsonArray } | { readonly container: JsonObject, key: string, keyLine: number }

/** One value, without recursion, so that depth cannot overflow the stack. */
function readValue(scanner: JsonScanner, limits: JsonLimits): JsonValue {
  const stack: Open[] = []

  const readKey = (open: Open) => {
    if (!('key' in open)) return
    scanner.skipSpace()
    if (scanner.peek() !== '"') scanner.fail(`A keyword in quotation marks belongs here, but ${scanner.here()} stands here`)
    open.keyLine = scanner.line
    open.key = scanner.string()
    scanner.skipSpace()
    if (scanner.peek() !== ':') scanner.fail(`A colon belongs here, but ${scanner.here()} stands here`)
    scanner.at++
  }

  for (;;) {
    scanner.skipSpace()
    const opening = scanner.peek()
    let value: JsonValue | null
    if (opening === '{' || opening === '[') {
      if (stack.length >= limits.depth) scanner.fail(`Objects and arrays are nested more than ${limits.depth} deep`, 'json-limit')
      const place = { line: scanner.line, start: scanner.at, end: scanner.at }
      const open: Open = opening === '{'
        ? { container: { kind: 'object', members: [], ...place }, key: '', keyLine: scanner.line }
        : { container: { kind: 'array', items: [], ...place } }
      scanner.at++
      scanner.skipSpace()
      if (scanner.peek() !== (opening === '{' ? '}' : ']')) {
        readKey(open)
        stack.push(open)
        continue
      }
      scanner.at++
      open.container.end = scanner.at
      value = open.container
    }
    else value = scanner.scalar()

    while (value !== null) {
      const open = stack.at(-1)
      if (!open) return value
      const held: number = 'key' in open
        ? open.container.members.push({ key: open.key, line: open.keyLine, value })
        : open.container.items.push(value)
      if (held > limits.members) scanner.fail(`An object or array holds more than ${limits.members} values`, 'json-limit')
      scanner.skipSpace()
      const mark = scanner.peek()
      if (mark === ',') {
        scanner.at++
        readKey(open)
        value = null
      }
      else if (mark === ('key' in open ? '}' : ']')) {
        scanner.at++
        open.container.end = scanner.at
        stack.pop()
        value = open.container
      }
      else scanner.fail(`A comma or ${'key' in open ? 'a closing brace' : 'a closing bracket'} belongs here, but ${scanner.here()} stands here`)
    }
  }
}

/**
 * Reads a JSON text (RFC 8259) strictly and hands out the items of its outermost array one by one, or the one value that
 * it is, so that a long array is never held whole. Unlike JSON.parse it keeps lines, the text of numbers and repeated
 * keys, and makes no object whose keys come from the text.
 * @throws JsonError with line and column, after the items before it have been handed out
 */
export function* readJsonItems(text: string, limits: JsonLimits): Generator<JsonValue> {
  const scanner = new JsonScanner(text, limits)
  scanner.skipSpace()
  if (scanner.peek() !== '[') yield readValue(scanner, limits)
  else {
    scanner.at++
    scanner.skipSpace()
    let more = scanner.peek() !== ']'
    while (more) {
      yield readValue(scanner, limits)
      scanner.skipSpace()
      more = scanner.peek() === ','
      if (more) scanner.at++
      else if (scanner.peek() !== ']') scanner.fail(`A comma or a closing bracket belongs here, but ${scanner.here()} stands here`)
    }
    scanner.at++
  }
  scanner.skipSpace()
  if (scanner.at < text.length) scanner.fail(`The JSON ends before ${scanner.here()}; nothing may follow it`)
}
