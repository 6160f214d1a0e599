import { SetRefusal, FileRefusal } from '../reading'
import { quote } from '../show-value'
import type { SetCollector } from '../set-collector'
import type { XmlToken } from '../xml/scanner'
import { XmlScanner } from '../xml/scanner'
import type { OmmEntry } from './fields'
import { nameOf, parseOmm } from './parse-omm'

/** Elements inside one another: ndm, omm, body, segment, data, meanElements and the value. */
const DEEPEST = 16
const MOST_VALUES = 1000
/** Messages that may stand beside an OMM in one ndm. */
const OTHER_MESSAGES = new Set(['acm', 'aem', 'apm', 'cdm', 'ocm', 'oem', 'opm', 'rdm', 'tdm'])
const ENCODINGS = new Set(['utf-8', 'us-ascii'])

type Opening = Extract<XmlToken, { kind: 'open' }>
interface Element { readonly name: string, readonly opening: Opening, text: string, hasElements: boolean }
interface Message { readonly opening: Opening, readonly depth: number, readonly entries: OmmEntry[], problem: SetRefusal | null }

const localName = (name: string) => name.slice(name.indexOf(':') + 1)

/** What an element without others in it says. */
function toEntry({ name, opening, text }: Element): OmmEntry {
  const local = localName(name)
  const parameter = opening.attributes.get('parameter')
  const unit = opening.attributes.get('units')
  const key = local === 'USER_DEFINED' && parameter !== undefined ? `USER_DEFINED_${parameter}` : local
  return { key, line: opening.line, value: text.trim(), ...unit !== undefined && { unit } }
}

/** Follows the tags of one file. */
class OmmXmlReader {
  private readonly open: Element[] = []
  private message: Message | null = null
  private isClosed = false

  constructor(private readonly scanner: XmlScanner, private readonly collector: SetCollector) {}

  read(): void {
    for (let token = this.scanner.next(); token; token = this.scanner.next()) {
      if (token.kind === 'declaration') this.tellEncoding(token)
      else if (token.kind === 'text') {
        if (!this.readText(token)) return
      }
      else if (token.kind === 'close') this.close(token.name, token.end)
      else {
        this.enter(token)
        if (token.isEmpty) this.close(token.name, this.scanner.at)
      }
    }
    const unclosed = this.open.at(-1)
    if (unclosed) this.scanner.fail(`The file ends before <${shown(unclosed.name)}> of line ${unclosed.opening.line} is closed`)
  }

  private tellEncoding({ encoding, line }: Extract<XmlToken, { kind: 'declaration' }>): void {
    if (encoding === null || ENCODINGS.has(encoding.toLowerCase())) return
    this.collector.warn(line, 'encoding', `The XML says that it is in ${quote(encoding)}; it was read by its first bytes, as UTF-16 with a byte-order mark or else as UTF-8. Save it as UTF-8 if a name looks wrong.`)
  }

  /** False where nothing more is to be read. */
  private readText({ value, line }: Extract<XmlToken, { kind: 'text' }>): boolean {
    const element = this.open.at(-1)
    if (element) {
      if (!this.message) return true
      if (element.text.length + value.length > 200_000) this.scanner.fail('An element holds more text than any value has', 'xml-limit')
      element.text += value
    }
    else if (value.trim() !== '') {
      if (!this.isClosed) this.scanner.fail(`Text stands before the first tag: ${quote(value.trim())}`)
      const blank = value.length - value.trimStart().length
      this.collector.warn(line + (value.slice(0, blank).match(/\r\n|[\r\n]/g)?.length ?? 0), 'trailing-text', `Text after the end of the XML, ${quote(value.trim())}, was left out. Remove it if it means nothing.`)
      return false
    }
    return true
  }

  private enter(opening: Opening): void {
    const { name, line } = opening
    const local = localName(name)
    if (this.isClosed) this.scanner.fail(`<${shown(name)}> stands after the end of the XML, which has one outermost element. Put several messages into one <ndm>`)
    if (this.open.length >= DEEPEST) this.scanner.fail(`Elements are nested more than ${DEEPEST} deep`, 'xml-limit')
    const parent = this.open.at(-1)
    if (parent) parent.hasElements = true
    else if (local !== 'omm' && local !== 'ndm') {
      throw new FileRefusal(line, 'xml-root', `The XML holds <${shown(name)}>, which is neither an OMM nor a combined message. Upload XML whose outermost element is <omm>, or <ndm> with <omm> elements in it.`)
    }
    const isInNdm = this.open.length === 1 && localName(parent!.name) === 'ndm'
    if (!this.message && local === 'omm' && (!parent || isInNdm)) {
      this.message = { opening, depth: this.open.length, entries: [], problem: null }
      const version = opening.attributes.get('version')
      if (version !== undefined) this.message.entries.push({ key: 'CCSDS_OMM_VERS', line, value: version })
    }
    else if (isInNdm && OTHER_MESSAGES.has(local)) {
      this.collector.refuse(line, null, 'other-message', `This is a CCSDS ${local.toUpperCase()}, not an OMM: it holds no mean elements of SGP4. Remove it, or ask its source for an OMM.`)
    }
    this.open.push({ name, opening, text: '', hasElements: false })
  }

  private close(name: string, end: number): void {
    const element = this.open.pop()
    if (!element) this.scanner.fail(`</${shown(name)}> closes what is not open`)
    if (element.name !== name) this.scanner.fail(`</${shown(name)}> stands where </${shown(element.name)}> belongs: line ${element.opening.line} opened it`)
    this.isClosed = this.open.length === 0
    const { message } = this
    if (!message) return
    if (this.open.length === message.depth) {
      this.message = null
      this.finish(message, end)
      return
    }
    const { line } = element.opening
    if (!element.hasElements) {
      if (message.entries.length < MOST_VALUES) message.entries.push(toEntry(element))
      else message.problem ??= new SetRefusal(line, 'too-many-keywords', `The message that begins at line ${message.opening.line} has more than ${MOST_VALUES} values. Put each message into an <omm> of its own.`)
    }
    else if (element.text.trim() !== '') {
      message.problem ??= new SetRefusal(line, 'stray-text', `<${shown(name)}> holds the text ${quote(element.text.trim())} beside its elements, so a tag may be lost. Remove the text, or ask for this set again.`)
    }
  }

  private finish({ opening, entries, problem }: Message, end: number): void {
    const { scanner } = this
    this.collector.take({ line: opening.line, name: nameOf(entries), text: () => scanner.text.slice(opening.start, end) }, (warn) => {
      if (problem) throw problem
      return parseOmm(entries, opening.line, 'message', warn)
    })
  }
}

const shown = (name: string) => quote(name).slice(1, -1)

/**
 * Reads Orbit Mean-Elements Messages in XML (CCSDS 505.0-B with 502.0-B-3): one `omm`, or an `ndm` with many, with or
 * without namespace prefixes. Schema locations are never fetched. Message by message, so that a long file is never
 * held as a tree.
 * @throws XmlError when the text is not XML, or holds a DTD or its entities
 * @throws FileRefusal when it is XML of another kind
 */
export function readOmmXml(text: string, collector: SetCollector): void {
  new OmmXmlReader(new XmlScanner(text), collector).read()
}
