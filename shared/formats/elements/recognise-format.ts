import { contentLines } from './lines'
import { tableKind } from './omm/csv-header'
import { spellKeyword } from './omm/keywords'
import type { ElementFormat } from './reading'
import { quote } from './show-value'
import { isWholeLine1, whichDataLine } from './tle/data-line'

export type Recognised =
  | { readonly ok: true, readonly format: ElementFormat }
  | { readonly ok: false, readonly line: number, readonly code: string, readonly message: string }

const READABLE = 'Element sets can be read as TLE (two or three lines) and as OMM in KVN, XML, JSON or CSV.'
/** Enough of a file to know its kind by. */
const HEAD = 4000
/** Lines that may stand before the first message of a file in KVN. */
const PREAMBLE = 50

function markupKind(head: string): 'html' | 'xml' | null {
  const lower = head.toLowerCase()
  if (/^<(?:!doctype html|html|head|body)\b/.test(lower)) return 'html'
  if (/^<(?:\?xml|!doctype|!--|(?:[a-z]\w{0,20}:)?(?:omm|ndm)\b)/.test(lower)) return 'xml'
  return null
}

const COMMENT = /^\s{0,20}COMMENT\s/i
const KEYWORD = /^\s{0,20}([A-Z_]{3,40})\s{0,20}=/i

/** KVN by its first line: a version line is one beyond doubt. */
function kvnKind(firstLine: string): { isSure: boolean, other: string | null } | null {
  const keyword = KEYWORD.exec(firstLine)?.[1]?.toUpperCase()
  const message = /^CCSDS_([A-Z]{2,8})_VERS$/.exec(keyword ?? '')?.[1]
  if (message) return { isSure: true, other: message === 'OMM' ? null : message }
  return keyword !== undefined && spellKeyword(keyword) !== null ? { isSure: false, other: null } : null
}

/**
 * Knows the notation of an upload by its content, never by a file's name. What cannot be read is named, with what can.
 */
export function recogniseFormat(text: string): Recognised {
  const refuse = (line: number, code: string, what: string): Recognised => ({ ok: false, line, code, message: `The file ${what}. ${READABLE}` })
  const known = (format: ElementFormat): Recognised => ({ ok: true, format })

  const head = text.slice(0, HEAD).trimStart()
  const markup = markupKind(head)
  if (markup === 'html') return refuse(1, 'html', 'looks like a web page (HTML), perhaps a sign-in page that was saved in place of the data')
  if (markup === 'xml') return known('omm-xml')

  const likelyJson = head.startsWith('{') || head.startsWith('[')
  let count = 0
  let first: { number: number, text: string, kvn: ReturnType<typeof kvnKind>, table: ReturnType<typeof tableKind> } | null = null
  for (const line of contentLines(text)) {
    // A name may begin with a bracket or be a keyword, so all else gives way to lines that are element sets beyond doubt.
    if (likelyJson ? isWholeLine1(line.text) : whichDataLine(line.text) !== null) return known('tle')
    if (++count > PREAMBLE || likelyJson || COMMENT.test(line.text.slice(0, 40))) continue
    const begin = line.text.slice(0, HEAD)
    const kvn = kvnKind(begin)
    if (kvn?.isSure && kvn.other === null) return known('omm-kvn')
    if (first) continue
    first = { number: line.number, text: begin, kvn, table: tableKind(begin) }
    if (first.table === 'header') return known('omm-csv')
  }
  if (likelyJson) return known('omm-json')
  if (!first) return refuse(1, 'empty', 'is empty')
  if (first.kvn?.other) return refuse(first.number, 'kvn', `looks like a CCSDS ${first.kvn.other} in KVN, which holds no mean elements of SGP4`)
  if (first.kvn) return known('omm-kvn')
  if (first.table) return known('omm-csv')
  return refuse(first.number, 'unknown-format', `begins with ${quote(first.text.trim())} and holds no element set that can be recognised`)
}
