import { contentLines } from '../lines'
import type { Line } from '../lines'
import { SetRefusal } from '../reading'
import { quote } from '../show-value'
import type { SetCollector } from '../set-collector'
import type { OmmEntry } from './fields'
import { ommKeyword, spellKeyword } from './keywords'
import { nameOf, parseOmm } from './parse-omm'

/** More than any message of the standard has, user-defined keywords included. */
const MOST_LINES = 1000
const LONGEST_KEY = 200
const VERSION = /^CCSDS_([A-Z]{2,8})_VERS$/

interface Message {
  readonly line: number
  readonly start: number
  end: number
  /** "OMM", or what else the version line names. */
  readonly kind: string
  readonly entries: OmmEntry[]
  problem: SetRefusal | null
}

/** "97.4021 [deg]" for a keyword that has a value in a unit; texts keep their brackets. */
function splitUnit(key: string, value: string): Pick<OmmEntry, 'value' | 'unit'> {
  if (!value.endsWith(']')) return { value }
  const known = ommKeyword(spellKeyword(key) ?? '')
  const open = value.lastIndexOf('[')
  if (!known || open < 0 || known.part === 'header' || known.part === 'metadata') return { value }
  return { value: value.slice(0, open).trimEnd(), unit: value.slice(open + 1, -1).trim() }
}

const isComment = (text: string) => /^comment(?:\s|$)/i.test(text.slice(0, 8))

/** Follows the lines of one file. */
class OmmKvnReader {
  private message: Message | null = null
  private stray: { from: Line, to: number } | null = null

  constructor(private readonly text: string, private readonly collector: SetCollector) {}

  read(): void {
    for (const line of contentLines(this.text)) this.take(line)
    this.tellStray()
    this.finish()
  }

  private take(line: Line): void {
    const content = line.text.trim()
    if (isComment(content)) {
      if (this.message) this.message.end = line.end
      return
    }
    const equals = content.indexOf('=')
    const key = equals < 0 ? content.slice(0, LONGEST_KEY).split(/\s/, 1)[0]! : content.slice(0, Math.min(equals, LONGEST_KEY)).trimEnd()
    // A keyword without its sign is a slip inside a message; any other text is no part of one.
    if (equals < 0 && (!this.message || spellKeyword(key) === null)) {
      this.stray = { from: this.stray?.from ?? line, to: line.number }
      return
    }
    this.tellStray()
    const version = VERSION.exec(key.toUpperCase())
    if (version) this.finish()
    this.message ??= { line: line.number, start: line.start, end: line.end, kind: version?.[1] ?? 'OMM', entries: [], problem: null }
    const { message } = this
    message.end = line.end
    if (equals < 0) message.problem ??= new SetRefusal(line.number, 'no-equals-sign', `${key} has no equals sign after it. Write ${key} = value, or ask for this set again.`)
    else if (message.entries.length >= MOST_LINES) message.problem ??= new SetRefusal(line.number, 'too-many-keywords', `The message that begins at line ${message.line} has more than ${MOST_LINES} keywords. Each message begins with a line CCSDS_OMM_VERS = 3.0: put it where it is missing.`)
    else message.entries.push({ key, line: line.number, ...splitUnit(key, content.slice(equals + 1).trimStart()) })
  }

  private tellStray(): void {
    const { stray } = this
    this.stray = null
    if (!stray) return
    const many = stray.to > stray.from.number
    this.collector.warn(stray.from.number, 'stray-line', `${many ? `Lines ${stray.from.number} to ${stray.to}` : 'The line'} (${quote(stray.from.text.trim())}) ${many ? 'hold' : 'holds'} no KEYWORD = value and ${many ? 'were' : 'was'} left out. Remove what does not belong.`)
  }

  private finish(): void {
    const { message, text } = this
    this.message = null
    if (!message) return
    const { line, kind, entries, problem, start, end } = message
    const name = nameOf(entries)
    if (kind !== 'OMM') {
      this.collector.refuse(line, name, 'other-message', `This is a CCSDS ${kind}, not an OMM: it holds no mean elements of SGP4. Remove it, or ask its source for an OMM.`)
      return
    }
    this.collector.take({ line, name, text: () => text.slice(start, end) }, (warn) => {
      if (problem) throw problem
      return parseOmm(entries, line, 'message', warn)
    })
  }
}

/**
 * Reads Orbit Mean-Elements Messages in KVN (CCSDS 502.0-B-3, section 7): one or many, each beginning with its
 * CCSDS_OMM_VERS line. Comments and keywords that a sender defines are passed over; units must be those of the
 * standard. Lines that hold no keyword are named in a warning.
 */
export function readOmmKvn(text: string, collector: SetCollector): void {
  new OmmKvnReader(text, collector).read()
}
