import { splitCsvRow } from '../csv/split-row'
import type { Line } from '../lines'
import { contentLines } from '../lines'
import type { SetCollector } from '../set-collector'
import type { CsvHeader } from './csv-header'
import { readCsvHeader } from './csv-header'
import type { OmmEntry } from './fields'
import { spellKeyword } from './keywords'
import { nameOf, parseOmm } from './parse-omm'

const MARKS = { ',': 'commas', ';': 'semicolons', '\t': 'tabs' } as const
/** Writers of CSV put an apostrophe before a text that a spreadsheet would run. */
const GUARDED = /^'+[=+\-@\t]/

function entriesOf(header: CsvHeader, fields: readonly string[], line: number): OmmEntry[] {
  const entries: OmmEntry[] = []
  for (const [i, key] of header.names.entries()) {
    if (spellKeyword(key) === null) continue
    const value = fields[i]!
    entries.push({ key, line, value: GUARDED.test(value) ? value.slice(1) : value })
  }
  return entries
}

const isBlankRow = (row: string) => /^[,;\s]*$/.test(row)

/** Blank fields at the end that a spreadsheet adds are no fault. */
function fitFields(fields: string[], columns: number): string[] {
  let used = fields.length
  while (used > columns && fields[used - 1]!.trim() === '') used--
  return used === fields.length ? fields : fields.slice(0, used)
}

/**
 * Reads Orbit Mean-Elements Messages as CSV (RFC 4180): a header row of OMM keywords in any order, then a set a row.
 * Semicolons or tabs in place of commas are read with a warning. A row that does not fit the header is refused, and the
 * next one read. The text kept of a set is the header and its row.
 * @throws FileRefusal when the first row is no such header
 */
export function readOmmCsv(text: string, collector: SetCollector): void {
  let header: CsvHeader | null = null
  let headerLine: Line | null = null
  for (const line of contentLines(text)) {
    if (!header || !headerLine) {
      header = readCsvHeader(line)
      headerLine = line
      if (header.delimiter !== ',') collector.warn(line.number, 'delimiter', `The fields are parted by ${MARKS[header.delimiter]} where commas belong; they are read so. Nothing needs to be done.`)
      continue
    }
    // Files that were put one after the other bring their header again; spreadsheets add rows of nothing but commas.
    if (line.text === headerLine.text || isBlankRow(line.text)) continue
    const split = splitCsvRow(line.text, header.delimiter)
    if (!split) {
      collector.refuse(line.number, null, 'quotes', 'A quotation mark of this row is not closed on its line, or stands in the midst of a field, so the fields cannot be told apart. Quote whole fields only, and double a mark inside one.')
      continue
    }
    const columns = header.names.length
    const fields = fitFields(split, columns)
    if (fields.length !== columns) {
      const [has, due] = [fields.length, columns].map(count => `${count} ${count === 1 ? 'field' : 'fields'}`)
      collector.refuse(line.number, null, 'columns', `The row has ${has} where the header has ${due}, so values would stand under wrong names. Complete the row, or ask for this set again from its source.`)
      continue
    }
    const entries = entriesOf(header, fields, line.number)
    const head = headerLine.text
    collector.take({ line: line.number, name: nameOf(entries), text: () => `${head}\n${line.text}` }, warn => parseOmm(entries, line.number, 'flat', warn))
  }
}
