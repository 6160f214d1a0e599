import type { MeanElements } from '../../../physics/types'
import { csvField } from '../../csv-field'
import type { OmmLine, OmmValue } from './omm-values'
import { FLAT_KEYWORDS, flatValues, messageLines } from './omm-values'
import type { MessageOrigin } from './written'

const written = (value: OmmValue) => 'text' in value ? value.text : value.number

/** One line a keyword (CCSDS 502.0-B-3, section 7); messages follow one another after a blank line. */
export function writeOmmKvn(sets: readonly MeanElements[], origin: MessageOrigin): string {
  const message = (e: MeanElements) => messageLines(e, origin).map(({ key, value }) => `${key.padEnd(20)}= ${written(value)}\n`).join('')
  return sets.map(message).join('\n')
}

const ESCAPES: Readonly<Record<string, string>> = { '&': '&amp;', '<': '&lt;', '>': '&gt;' }
// XML 1.0 §2.2 leaves these two out, however they are written.
const escapeXml = (text: string) => text.replace(/[&<>]/g, mark => ESCAPES[mark]!).replace(/[\uFFFE\uFFFF]/g, '\uFFFD')

const XML_HEAD = '<?xml version="1.0" encoding="UTF-8"?>\n'

function ommElement(e: MeanElements, origin: MessageOrigin, indent: string): string {
  const lines = messageLines(e, origin)
  const part = (name: OmmLine['part'], depth: number) => {
    const pad = indent + '  '.repeat(depth)
    const elements = lines.filter(line => line.part === name && line.key !== 'CCSDS_OMM_VERS')
      .map(({ key, value }) => `${pad}  <${key}>${escapeXml(written(value))}</${key}>\n`).join('')
    return `${pad}<${name}>\n${elements}${pad}</${name}>\n`
  }
  return `${indent}<omm id="CCSDS_OMM_VERS" version="3.0">\n${part('header', 1)}${indent}  <body>\n${indent}    <segment>\n${part('metadata', 3)}`
    + `${indent}      <data>\n${part('meanElements', 4)}${part('tleParameters', 4)}${indent}      </data>\n${indent}    </segment>\n${indent}  </body>\n${indent}</omm>\n`
}

/** An `omm` for one set, an `ndm` with an `omm` each for several (CCSDS 505.0-B). */
export function writeOmmXml(sets: readonly MeanElements[], origin: MessageOrigin): string {
  if (sets.length === 1) return XML_HEAD + ommElement(sets[0]!, origin, '')
  return `${XML_HEAD}<ndm>\n${sets.map(e => ommElement(e, origin, '  ')).join('')}</ndm>\n`
}

/** An array of flat objects; numbers as numbers, null for what is not known. */
export function writeOmmJson(sets: readonly MeanElements[]): string {
  const shown = (value: OmmValue | null) => value === null ? 'null' : 'text' in value ? JSON.stringify(value.text) : value.number
  const object = (e: MeanElements) => `  {\n${flatValues(e).map((value, i) => `    "${FLAT_KEYWORDS[i]!}": ${shown(value)}`).join(',\n')}\n  }`
  return `[\n${sets.map(object).join(',\n')}\n]\n`
}

/** What the reader takes off again: one apostrophe before a text that would be a formula but for apostrophes. */
const GUARDED = /^'+[=+\-@\t]/

/**
 * A header of keywords and a row a set (RFC 4180). Texts that a spreadsheet would run as a formula have an apostrophe before
 * them; numbers never have.
 */
export function writeOmmCsv(sets: readonly MeanElements[]): string {
  const field = (value: OmmValue | null) => value === null ? '' : 'text' in value ? csvField(GUARDED.test(value.text) ? `'${value.text}` : value.text) : value.number
  return [FLAT_KEYWORDS, ...sets.map(e => flatValues(e).map(field))].map(row => `${row.join(',')}\r\n`).join('')
}
