import { describeCharacter } from '../show-value'
import type { JsonLimits, JsonScalar } from './json-value'
import { JsonError } from './json-value'

const NUMBER = /-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?/y
/** No JSON, but written by some programs; passed on as the text of a number, so that one set is refused and not the file. */
const NO_NUMBER = /-?(?:NaN|Infinity)/y
const ESCAPES: Readonly<Record<string, string>> = { '"': '"', '\\': '\\', '/': '/', 'b': '\b', 'f': '\f', 'n': '\n', 'r': '\r', 't': '\t' }

/** Walks a JSON text (RFC 8259) token by token and knows line and column. */
export class JsonScanner {
  at = 0
  line = 1
  private lineStart = 0

  constructor(readonly text: string, private readonly limits: JsonLimits) {}

  fail(message: string, code: 'json' | 'json-limit' = 'json'): never {
    throw new JsonError(this.line, this.at - this.lineStart + 1, code, message)
  }

  /** What stands here, in words. */
  here(): string {
    return this.at >= this.text.length ? 'the end of the file' : describeCharacter(this.text.charCodeAt(this.at))
  }

  peek(): string | undefined {
    return this.text[this.at]
  }

  skipSpace(): void {
    for (; ; this.at++) {
      const code = this.text.charCodeAt(this.at)
      if (code === 0x0A || code === 0x0D) {
        if (code === 0x0D && this.text.charCodeAt(this.at + 1) === 0x0A) this.at++
        this.line++
        this.lineStart = this.at + 1
      }
      else if (code !== 0x20 && code !== 0x09) return
    }
  }

  scalar(): JsonScalar {
    const { line, at: start } = this
    const place = () => ({ line, start, end: this.at })
    const c = this.peek()
    if (c === '"') return { kind: 'string', value: this.string(), ...place() }
    if (this.word('null')) return { kind: 'null', ...place() }
    if (this.word('true')) return { kind: 'boolean', value: true, ...place() }
    if (this.word('false')) return { kind: 'boolean', value: false, ...place() }
    const text = this.match(NUMBER) ?? this.match(NO_NUMBER)
    if (text === null) this.fail(`A value belongs here, but ${this.here()} stands here`)
    if (text.length > this.limits.characters) this.fail(`A number has more than ${this.limits.characters} characters`, 'json-limit')
    const next = this.text.charCodeAt(this.at)
    if ((next >= 0x30 && next <= 0x39) || next === 0x2E) this.fail('A number is written in a way that JSON does not know (no leading zeros, digits on both sides of a point)')
    return { kind: 'number', text, ...place() }
  }

  string(): string {
    if (this.peek() !== '"') this.fail(`A quotation mark belongs here, but ${this.here()} stands here`)
    this.at++
    const first = this.at
    let value = ''
    let copied = first
    for (;;) {
      if (this.at - first > this.limits.characters) this.fail(`A string has more than ${this.limits.characters} characters`, 'json-limit')
      const code = this.text.charCodeAt(this.at)
      if (code === 0x22) break
      if (code === 0x5C) {
        value += this.text.slice(copied, this.at) + this.escape()
        copied = this.at
      }
      else if (code >= 0x20) this.at++
      else this.fail(this.at >= this.text.length ? 'A string is not closed' : 'A string holds a line end or another control character')
    }
    value += this.text.slice(copied, this.at)
    this.at++
    return value
  }

  private escape(): string {
    const letter = this.text[this.at + 1]
    if (letter === 'u') {
      const hex = this.text.slice(this.at + 2, this.at + 6)
      if (!/^[0-9a-fA-F]{4}$/.test(hex)) this.fail('Four hexadecimal digits belong after \\u')
      this.at += 6
      return String.fromCharCode(Number.parseInt(hex, 16))
    }
    const known = letter !== undefined && Object.hasOwn(ESCAPES, letter) ? ESCAPES[letter] : undefined
    if (known === undefined) this.fail('A backslash in a string begins an escape that JSON does not know')
    this.at += 2
    return known
  }

  private word(word: string): boolean {
    if (!this.text.startsWith(word, this.at)) return false
    this.at += word.length
    return true
  }

  private match(pattern: RegExp): string | null {
    pattern.lastIndex = this.at
    const found = pattern.exec(this.text)?.[0] ?? null
    if (found !== null) this.at += found.length
    return found
  }
}
