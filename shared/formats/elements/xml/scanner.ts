import { describeCharacter } from '../show-value'
import { decodeReferences } from './references'
import { XmlError } from './xml-error'

export type XmlToken =
  | { readonly kind: 'open', readonly name: string, readonly attributes: ReadonlyMap<string, string>, readonly isEmpty: boolean, readonly line: number, readonly start: number }
  | { readonly kind: 'close', readonly name: string, readonly line: number, readonly end: number }
  | { readonly kind: 'text', readonly value: string, readonly line: number }
  | { readonly kind: 'declaration', readonly encoding: string | null, readonly line: number }

/** Characters of one run of text, one attribute's value, one name; attributes of one tag. */
const LIMITS = { text: 100_000, name: 200, attributes: 50 }

const NAME = /[A-Za-z_\u00C0-\uFFFD][\w.\-:\u00B7-\uFFFD]*/y
const NONE: ReadonlyMap<string, string> = new Map()
const isSpace = (code: number) => code === 0x20 || code === 0x0A || code === 0x0D || code === 0x09

/**
 * Walks an XML 1.0 text token by token, in one pass and without holding what was read, and knows line and column.
 * Strict on tags, attributes and references. A document type is refused unread, and so is every reference but the five
 * predefined and the numeric ones: nothing is ever expanded or fetched.
 */
export class XmlScanner {
  at = 0
  line = 1
  private lineStart = 0

  constructor(readonly text: string) {}

  fail(message: string, code: XmlError['code'] = 'xml'): never {
    throw new XmlError(this.line, this.at - this.lineStart + 1, code, message)
  }

  /** The next token but comments and instructions; null at the end. */
  next(): XmlToken | null {
    for (;;) {
      if (this.at >= this.text.length) return null
      const line = this.line
      if (this.text[this.at] !== '<') {
        const open = this.text.indexOf('<', this.at)
        return { kind: 'text', value: this.decoded(open < 0 ? this.text.length : open), line }
      }
      if (this.follows('<!--')) this.skipPast('-->', 'A comment')
      else if (this.follows('<![CDATA[')) {
        const start = this.at + 9
        const end = this.text.indexOf(']]>', start)
        if (end < 0) this.fail('A CDATA section is not closed')
        if (end - start > LIMITS.text) this.fail(`A CDATA section has more than ${LIMITS.text} characters`, 'xml-limit')
        this.moveTo(end + 3)
        return { kind: 'text', value: this.text.slice(start, end), line }
      }
      else if (this.follows('<?')) {
        const start = this.at
        this.skipPast('?>', 'An instruction')
        if (start > 0 || !this.text.startsWith('<?xml', start)) continue
        return { kind: 'declaration', encoding: /\sencoding\s{0,5}=\s{0,5}["']([\w.-]{1,40})["']/.exec(this.text.slice(start, Math.min(this.at, start + 300)))?.[1] ?? null, line }
      }
      else if (this.follows('<!')) this.fail('A document type (DTD) or another declaration begins here, which is refused unread', 'xml-dtd')
      else return this.follows('</') ? this.closeTag() : this.openTag()
    }
  }

  private openTag(): XmlToken {
    const { line, at: start } = this
    this.at++
    const name = this.name('a tag')
    let attributes: Map<string, string> | null = null
    for (;;) {
      const before = this.at
      this.skipSpace()
      const mark = this.text[this.at]
      if (mark === '>' || mark === '/') {
        if (mark === '/' && this.text[this.at + 1] !== '>') this.fail('A slash in a tag belongs right before its end')
        this.at += mark === '>' ? 1 : 2
        return { kind: 'open', name, attributes: attributes ?? NONE, isEmpty: mark === '/', line, start }
      }
      if (this.at === before) this.fail(`A blank or the end of the tag belongs here, but ${this.here()} stands here`)
      attributes ??= new Map()
      if (attributes.size >= LIMITS.attributes) this.fail(`A tag has more than ${LIMITS.attributes} attributes`, 'xml-limit')
      const key = this.name('an attribute')
      this.skipSpace()
      if (this.text[this.at] !== '=') this.fail(`An equals sign belongs here, but ${this.here()} stands here`)
      this.at++
      this.skipSpace()
      if (attributes.has(key)) this.fail('An attribute stands twice in one tag')
      attributes.set(key, this.attributeValue())
    }
  }

  private attributeValue(): string {
    const quote = this.text[this.at]
    if (quote !== '"' && quote !== '\'') this.fail(`A quotation mark belongs here, but ${this.here()} stands here`)
    this.at++
    let end = this.at
    for (; this.text[end] !== quote; end++) {
      if (end >= this.text.length) this.fail('The value of an attribute is not closed')
      if (this.text[end] === '<') this.fail('The value of an attribute holds "<" or is not closed')
      if (end - this.at > LIMITS.text) this.fail(`The value of an attribute has more than ${LIMITS.text} characters`, 'xml-limit')
    }
    const value = this.decoded(end)
    this.at++
    return value
  }

  private closeTag(): XmlToken {
    const { line } = this
    this.at += 2
    const name = this.name('a tag')
    this.skipSpace()
    if (this.text[this.at] !== '>') this.fail(`The end of the tag belongs here, but ${this.here()} stands here`)
    this.at++
    return { kind: 'close', name, line, end: this.at }
  }

  private name(what: string): string {
    NAME.lastIndex = this.at
    const name = NAME.exec(this.text)?.[0]
    if (name === undefined) this.fail(`The name of ${what} belongs here, but ${this.here()} stands here`)
    if (name.length > LIMITS.name) this.fail(`The name of ${what} has more than ${LIMITS.name} characters`, 'xml-limit')
    this.at += name.length
    return name
  }

  /** Text from here to `end` with its references resolved; moves there. */
  private decoded(end: number): string {
    if (end - this.at > LIMITS.text) this.fail(`A text has more than ${LIMITS.text} characters`, 'xml-limit')
    const raw = this.text.slice(this.at, end)
    if (!raw.includes('&')) {
      this.moveTo(end)
      return raw
    }
    const value = decodeReferences(raw, (offset, what) => {
      this.moveTo(this.at + offset)
      this.fail(what, 'xml-entity')
    })
    this.moveTo(end)
    return value
  }

  private here(): string {
    return this.at >= this.text.length ? 'the end of the file' : describeCharacter(this.text.charCodeAt(this.at))
  }

  private follows(mark: string): boolean {
    return this.text.startsWith(mark, this.at)
  }

  private skipPast(mark: string, what: string): void {
    const end = this.text.indexOf(mark, this.at + 2)
    if (end < 0) this.fail(`${what} is not closed`)
    this.moveTo(end + mark.length)
  }

  private skipSpace(): void {
    let end = this.at
    while (isSpace(this.text.charCodeAt(end))) end++
    if (end > this.at) this.moveTo(end)
  }

  /** Goes on to `end`, counting the lines on the way. */
  private moveTo(end: number): void {
    for (let i = this.at; i < end; i++) {
      const code = this.text.charCodeAt(i)
      if (code !== 0x0A && (code !== 0x0D || this.text.charCodeAt(i + 1) === 0x0A)) continue
      this.line++
      this.lineStart = i + 1
    }
    this.at = end
  }
}
