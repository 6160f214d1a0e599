export type CsvDelimiter = ',' | ';' | '\t'

/**
 * The fields of one row (RFC 4180): a field may stand in quotation marks, doubled inside it. Null where a mark stands
 * in the midst of a field, or a quoted one is not closed on its line; then nothing says where the fields part.
 */
export function splitCsvRow(row: string, delimiter: CsvDelimiter): string[] | null {
  if (!row.includes('"')) return row.split(delimiter)
  const fields: string[] = []
  for (let at = 0; ; at++) {
    let end: number
    while (row[at] === ' ') at++
    if (row[at] === '"') {
      let close = row.indexOf('"', at + 1)
      while (close >= 0 && row[close + 1] === '"') close = row.indexOf('"', close + 2)
      if (close < 0) return null
      end = close + 1
      while (row[end] === ' ') end++
      if (end < row.length && row[end] !== delimiter) return null
      fields.push(row.slice(at + 1, close).replaceAll('""', '"'))
    }
    else {
      end = row.indexOf(delimiter, at)
      if (end < 0) end = row.length
      const field = row.slice(at, end)
      if (field.includes('"')) return null
      fields.push(field)
    }
    if (end >= row.length) return fields
    at = end
  }
}
