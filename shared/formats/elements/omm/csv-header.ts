import type { CsvDelimiter } from '../csv/split-row'
import { splitCsvRow } from '../csv/split-row'
import type { Line } from '../lines'
import { FileRefusal } from '../reading'
import { quote } from '../show-value'
import { spellKeyword } from './keywords'

const DELIMITERS: readonly CsvDelimiter[] = [',', ';', '\t']
/** A header may be long, but a line of megabytes is none. */
const LONGEST_HEADER = 20_000
/** Keywords that make a row a header beyond doubt. */
const SURE = 3
/** Fields that make a line a row of a table, whatever they hold. */
const MANY = 10

const REQUIRED = ['EPOCH', 'MEAN_MOTION', 'ECCENTRICITY', 'INCLINATION', 'RA_OF_ASC_NODE', 'ARG_OF_PERICENTER', 'MEAN_ANOMALY', 'BSTAR', 'MEAN_MOTION_DOT', 'MEAN_MOTION_DDOT']

export interface CsvHeader {
  readonly delimiter: CsvDelimiter
  /** As written, one a column. */
  readonly names: readonly string[]
}

const keywordsIn = (fields: readonly string[]) => fields.filter(field => spellKeyword(field.trim()) !== null).length

/** How the fields of a table's first line are parted: by the mark that shows the most keywords, then the most fields. */
function splitHeader(text: string): CsvHeader {
  const split = DELIMITERS.map(delimiter => ({ delimiter, names: (splitCsvRow(text.slice(0, LONGEST_HEADER), delimiter) ?? []).map(name => name.trim()) }))
  return split.sort((a, b) => keywordsIn(b.names) - keywordsIn(a.names) || b.names.length - a.names.length)[0]!
}

/** Whether a file's first line is that of a table: a header of keywords, or a row of many fields. */
export function tableKind(firstLine: string): 'header' | 'rows' | null {
  const { names } = splitHeader(firstLine)
  const keywords = keywordsIn(names)
  if (keywords >= SURE) return 'header'
  return names.length >= MANY || (names.length > 2 && keywords > 1) ? 'rows' : null
}

/**
 * The columns of an OMM table, named by the keywords of the standard, in any order; others are passed over.
 * @throws FileRefusal when there is no such header, or it lacks a column or has one twice
 */
export function readCsvHeader(line: Line): CsvHeader {
  const header = splitHeader(line.text)
  if (keywordsIn(header.names) < 2) {
    throw new FileRefusal(line.number, 'csv-header', `The first row of the table, ${quote(line.text.trim())}, does not name the columns. Put a row of OMM keywords first: OBJECT_NAME, OBJECT_ID, EPOCH, MEAN_MOTION and so on, in the order of the columns.`)
  }
  const known = header.names.map(spellKeyword)
  const twice = known.find((key, i) => key !== null && known.indexOf(key) !== i)
  if (twice) throw new FileRefusal(line.number, 'duplicate-keyword', `${twice} heads two columns, and nothing says which is meant. Remove one.`)
  const missing = REQUIRED.filter(key => !known.includes(key))
  if (missing.length > 0) {
    throw new FileRefusal(line.number, 'missing', `The header row lacks ${missing.join(', ')}. A missing value is not zero: add the ${missing.length === 1 ? 'column' : 'columns'}, or ask for the file again from its source.`)
  }
  return header
}
