import { describe, expect, it } from 'vitest'
import { csvField } from '#shared/formats/csv-field'
import { tableCsv } from '#shared/formats/table-csv'
import { servedTable } from './table-fixture'

/** A reader of its own, straight from the grammar of RFC 4180 §2: fields, quoted or not, CR LF at each row's end. */
function readCsv(text: string): string[][] {
  const rows: string[][] = []
  let row: string[] = []
  let at = 0
  while (at < text.length) {
    let field = ''
    if (text[at] === '"') {
      for (at++; text[at] !== '"' || text[at + 1] === '"'; at++) {
        if (at >= text.length) throw new Error('a quoted field is not closed')
        if (text[at] === '"') at++
        field += text[at]
      }
      at++
    }
    else {
      while (at < text.length && text[at] !== ',' && text[at] !== '\r') {
        if (text[at] === '"' || text[at] === '\n') throw new Error('a quote or line feed outside quotes')
        field += text[at++]
      }
    }
    row.push(field)
    if (text[at] === ',') at++
    else if (text.startsWith('\r\n', at)) {
      rows.push(row)
      row = []
      at += 2
    }
    else throw new Error(`a row does not end in CR LF at ${at}`)
  }
  return rows
}

const records = (text: string) => {
  const [header, ...rows] = readCsv(text)
  return rows.map((row) => {
    expect(row).toHaveLength(header!.length)
    return Object.fromEntries(header!.map((name, i) => [name, row[i]!]))
  })
}

describe('a tuning table as CSV', () => {
  it('says the same as the table, read back by the grammar of RFC 4180', () => {
    const table = servedTable()
    const rows = records(tableCsv(table))
    expect(rows).toHaveLength(2)
    rows.forEach((row, i) => {
      const retune = table.retunes[i]!
      for (const [key, value] of Object.entries(retune)) {
        if (value === null) expect(row[key]).toBe('')
        else if (typeof value === 'number') expect(Number(row[key])).toBe(value)
        else expect(row[key]).toBe(value)
      }
      expect(row).toMatchObject({
        tableId: 'table-1', revision: '3', digest: table.digest, publishedAt: table.publishedAt, verdict: 'tight', passId: 'pass-1', spacecraft: 'Petrel "A", first', catalogueNumber: '90001', aos: table.pass.aos, culmination: table.pass.culmination,
        los: table.pass.los, maxElevationDeg: '41.25', direction: 'uplink', carrierHz: '437500000', symbolRateHz: '9600', radio: 'Bench\r\nradio', latencyMs: '50', allowanceHz: '2400', worstResidualHz: '2001.5', elementSetSha256: table.elementSet.sha256, caution: table.caution,
      })
    })
  })

  it('numbers its rows and says in the last column how many there are', () => {
    const text = tableCsv(servedTable())
    expect(readCsv(text)[0]!.at(-1)).toBe('rows')
    expect(records(text).map(row => [row.row, row.rows])).toEqual([['1', '2'], ['2', '2']])
    expect(text.endsWith('\r\n')).toBe(true)
  })

  it('lets no spreadsheet run a text, and leaves numbers alone', () => {
    const [row] = records(tableCsv(servedTable()))
    expect([row!.station, row!.link]).toEqual(['\'=Cove+1', '\'-command'])
    expect([row!.dopplerHz, row!.residualMinHz]).toEqual(['-9790.123', '-1200'])
    for (const start of ['=', '+', '-', '@', '\t']) expect(csvField(`${start}1`)).toMatch(/^'/)
    expect(csvField(-1)).toBe('-1')
  })

  it('leaves empty what is not known', () => {
    const table = servedTable()
    const unnumbered = servedTable({ pass: { ...table.pass, spacecraft: { ...table.pass.spacecraft, catalogueNumber: null } } })
    expect(records(tableCsv(unnumbered))[0]!.catalogueNumber).toBe('')
    expect(() => csvField(Number.NaN)).toThrow(/finite/)
  })
})
