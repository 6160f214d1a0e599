import { contentLines } from './lines'
import type { ElementFormat } from './reading'
import { quote } from './show-value'
import { isWholeLine1, whichDataLine } from './tle/data-line'

export type Recognised =
  | { readonly ok: true, readonly format: ElementFormat }
  | { readonly ok: false, readonly line: number, readonly code: string, readonly message: string }

const READABLE = 'Element sets can be read as TLE (two or three lines) and as OMM in JSON.'
/** Enough of a file to know its kind by. */
const HEAD = 4000

const OMM_KEYWORDS = ['OBJECT_NAME', 'OBJECT_ID', 'EPOCH', 'MEAN_MOTION', 'ECCENTRICITY', 'NORAD_CAT_ID']

function markupKind(head: string): { code: string, what: string } | null {
  const lower = head.toLowerCase()
  if (/^<(?:!doctype html|html|head|body)\b/.test(lower)) return { code: 'html', what: 'a web page (HTML), perhaps a sign-in page that was saved in place of the data' }
  if (/^<(?:\?xml|!doctype|!--|(?:[a-z]\w{0,20}:)?(?:omm|ndm)\b)/.test(lower)) return { code: 'xml', what: 'XML' }
  return null
}

/** A table: a header of OMM keywords, or rows of many fields parted by one mark. */
function isTable(firstLine: string): boolean {
  const upper = firstLine.toUpperCase()
  for (const mark of [',', ';', '\t']) {
    const fields = upper.split(mark).map(field => field.trim().replaceAll('"', ''))
    if (fields.length >= 10 || (fields.length > 2 && OMM_KEYWORDS.filter(word => fields.includes(word)).length > 1)) return true
  }
  return false
}

/**
 * Knows the notation of an upload by its content, never by a file's name. What cannot be read is named, with what can.
 */
export function recogniseFormat(text: string): Recognised {
  const head = text.slice(0, HEAD).trimStart()
  const markup = markupKind(head)
  const refuse = (line: number, code: string, what: string): Recognised => ({ ok: false, line, code, message: `The file looks like ${what}. ${READABLE}` })

  if (markup) return refuse(1, markup.code, markup.what)
  const likelyJson = head.startsWith('{') || head.startsWith('[')
  let first: { number: number, text: string } | null = null
  for (const line of contentLines(text)) {
    first ??= { number: line.number, text: line.text.slice(0, HEAD) }
    // A name may begin with a bracket, so JSON gives way to lines that are element sets beyond doubt.
    if (likelyJson ? isWholeLine1(line.text) : whichDataLine(line.text) !== null) return { ok: true, format: 'tle' }
  }
  if (!first) return { ok: false, line: 1, code: 'empty', message: `The file is empty. ${READABLE}` }
  if (likelyJson) return { ok: true, format: 'omm-json' }
  const keyword = /^\s{0,20}([A-Za-z_]{3,40})\s{0,20}=/.exec(first.text)?.[1]?.toUpperCase()
  if (keyword?.startsWith('CCSDS_')) return refuse(first.number, 'kvn', `a CCSDS ${keyword.slice(6, 9)} in KVN (lines of KEYWORD = value)`)
  if (keyword && OMM_KEYWORDS.includes(keyword)) return refuse(first.number, 'kvn', 'an OMM in KVN (lines of KEYWORD = value)')
  if (isTable(first.text)) return refuse(first.number, 'csv', 'a table (CSV)')
  return { ok: false, line: first.number, code: 'unknown-format', message: `The file, which begins with ${quote(first.text.trim())}, holds no element set that can be recognised. ${READABLE}` }
}
