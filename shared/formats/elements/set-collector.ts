import type { MeanElements } from '../../physics/types'
import { contentKey } from './content-key'
import type { ElementFormat, LineNote, ReadingEnd, SetSink, Warn } from './reading'
import { SetRefusal } from './reading'
import { quote } from './show-value'

const DAY_US = 86_400_000_000

/** Thrown when an upload holds more sets than may be read at once. */
export class TooManySets extends Error {
  constructor(readonly line: number, readonly limit: number) {
    super(`The file holds more than ${limit} element sets, which is the most that one upload may bring. Split it and upload the parts.`)
    this.name = 'TooManySets'
  }
}

/** Hands on what became of each set of an upload, one by one; a bad one never loses the good ones. */
export class SetCollector {
  private readonly seen = new Map<string, { line: number, name: string | null }>()
  private first: LineNote | null = null
  private sets = 0
  private refusals = 0
  private repeated = 0
  private attempts = 0

  constructor(private readonly nowMs: number, private readonly limit: number, private readonly sink: SetSink) {}

  /** Reads one set; what `read` throws as SetRefusal becomes that set's refusal. */
  take(at: { line: number, name: string | null, text: () => string }, read: (warn: Warn) => MeanElements): void {
    this.count(at.line)
    const notes: LineNote[] = []
    const warn: Warn = (line, code, message) => { notes.push(this.note(line, at.name, code, message)) }
    try {
      const elements = read(warn)
      this.keep(at.line, elements, at.text, notes)
    }
    catch (error) {
      if (!(error instanceof SetRefusal)) throw error
      this.pass(this.note(error.line, at.name, error.code, error.message))
    }
  }

  refuse(line: number, name: string | null, code: string, message: string): void {
    this.count(line)
    this.pass(this.note(line, name, code, message))
  }

  warn(line: number, code: string, message: string): void {
    this.sink.warning({ line, code, message })
  }

  finish(format: ElementFormat): ReadingEnd {
    if (this.sets > 0) return { kind: 'read', format, sets: this.sets, refusals: this.refusals, repeated: this.repeated }
    if (!this.first) return { kind: 'refused', detail: 'The file holds no element set.', errors: [{ line: 1, code: 'no-sets', message: 'No element set was found. Upload a file with at least one.' }] }
    const detail = this.refusals === 1 ? `The only element set in the file was refused. ${this.first.message}` : `None of the ${this.refusals} element sets in the file can be taken; each is listed with its reason.`
    return { kind: 'refused', detail, errors: null }
  }

  private count(line: number): void {
    if (++this.attempts > this.limit) throw new TooManySets(line, this.limit)
  }

  private pass(refusal: LineNote): void {
    this.first ??= refusal
    this.refusals++
    this.sink.refusal(refusal)
  }

  private keep(line: number, elements: MeanElements, text: () => string, notes: LineNote[]): void {
    const key = contentKey(elements)
    const before = this.seen.get(key)
    if (before) {
      this.repeated++
      const otherName = before.name === elements.name ? '' : ` under another name (${quote(before.name ?? 'none')} there)`
      this.sink.warning(this.note(line, elements.name, 'repeated', `The same set stands at line ${before.line} already${otherName}; it is counted once. Nothing needs to be done unless another set was meant.`))
      return
    }
    this.seen.set(key, { line, name: elements.name })
    const aheadUs = elements.epochUtcUs - this.nowMs * 1000
    if (aheadUs > DAY_US) {
      notes.push(this.note(line, elements.name, 'epoch-ahead', `The epoch lies ${(aheadUs / DAY_US).toFixed(1)} days ahead of now. Check the year and the day before putting this set into use.`))
    }
    for (const note of notes) this.sink.warning(note)
    this.sets++
    this.sink.set({ line, elements, text: text(), contentKey: key, warnings: notes })
  }

  private note(line: number, name: string | null, code: string, message: string): LineNote {
    return name === null ? { line, code, message } : { line, name, code, message }
  }
}
