import { describe, expect, it } from 'vitest'
import { splitCsvRow } from '#shared/formats/elements/csv/split-row'
import { csv, mustRead, mustRefuse, omm, ommMembers, onlySet, readText } from './support'

const refused = (text: string) => mustRefuse(readText(text)).errors[0]!
const reference = onlySet(readText(omm())).elements
const keys = Object.keys(ommMembers())

describe('the fields of a row of CSV', () => {
  it('part at commas, but not inside quotation marks', () => {
    // Source: RFC 4180, section 2, rules 5 to 7.
    expect(splitCsvRow('a,b,,c', ',')).toEqual(['a', 'b', '', 'c'])
    expect(splitCsvRow('"a","b ""c"", d",', ',')).toEqual(['a', 'b "c", d', ''])
    expect(splitCsvRow('"a" , b,"c"', ',')).toEqual(['a', 'b', 'c'])
    expect(splitCsvRow('', ',')).toEqual([''])
    expect(splitCsvRow('a;"b;c"', ';')).toEqual(['a', 'b;c'])
  })

  it('cannot be told where a quotation mark stands astray', () => {
    for (const row of ['"a', 'a"b,c', '"a"b,c', '"a""', ',"']) expect(splitCsvRow(row, ','), row).toBeNull()
  })
})

describe('an OMM as CSV', () => {
  it('is the set that JSON has, in any order of columns, with others beside them', () => {
    const turned = [[...keys, 'PERIOD', 'FILE'], [...Object.values(ommMembers()), '94.6', '7']].map(row => row.reverse().join(','))
    for (const form of [csv({}), csv({}).replaceAll('\n', '\r\n'), `\uFEFF\n${csv({})}\n\n`, turned.join('\n'), csv({}).split('\n').map(row => row.split(',').map(field => `"${field}"`).join(',')).join('\n')]) {
      expect(mustRead(readText(form))).toMatchObject({ format: 'omm-csv', warnings: [], refusals: [], sets: [{ elements: reference }] })
    }
  })

  it('takes blank fields for missing, never for zero', () => {
    expect(refused(csv({ BSTAR: '' }))).toMatchObject({ code: 'missing', line: 2, name: 'INVENTED' })
    expect(onlySet(readText(csv({ ELEMENT_SET_NO: '', CLASSIFICATION_TYPE: '' }))).elements).toMatchObject({ elementSetNumber: null, classification: 'U' })
  })

  it('refuses rows that do not fit the header and keeps the others', () => {
    const rows = csv({}, { NORAD_CAT_ID: 90002 }, { NORAD_CAT_ID: 90003 }, { OBJECT_NAME: '"OPEN' }, { NORAD_CAT_ID: 90004 }).split('\n')
    rows[2] += ',,,'
    rows[3] += ',1'
    const reading = mustRead(readText(rows.join('\n')))
    expect(reading.sets.map(set => set.elements.catalogueNumber)).toEqual(['90001', '90002', '90004'])
    expect(reading.refusals.map(r => [r.code, r.line])).toEqual([['columns', 4], ['quotes', 5]])
    expect(reading.refusals[0]!.message).toMatch(/18 fields where the header has 17/)
  })

  it('keeps the header with the text of each row, so that it can be read again', () => {
    const { text } = onlySet(readText(csv({}, { NORAD_CAT_ID: 90002, BSTAR: 'x' })))
    expect(text).toBe(csv({}))
    expect(onlySet(readText(text)).elements).toEqual(reference)
  })

  it('passes over a header that comes again, and rows of nothing', () => {
    expect(mustRead(readText(`${csv({})}\n${csv({ NORAD_CAT_ID: 90002 })}\n${','.repeat(16)}\n , ,\n`))).toMatchObject({ sets: [{ line: 2 }, { line: 4 }], refusals: [] })
  })

  it('reads semicolons and tabs with a warning', () => {
    for (const mark of [';', '\t']) expect(mustRead(readText(csv({}).replaceAll(',', mark)))).toMatchObject({ sets: [{ elements: reference }], warnings: [{ code: 'delimiter', line: 1 }] })
  })

  it('refuses decimal commas and says so', () => {
    const text = csv({ INCLINATION: '97,4021' }).split('\n').map((row, i) => i === 0 ? row.replaceAll(',', ';') : Object.values({ ...ommMembers(), INCLINATION: '97,4021' }).join(';')).join('\n')
    expect(refused(text)).toMatchObject({ code: 'number', line: 2 })
    expect(refused(text).message).toContain('It has a decimal comma')
  })

  it('refuses a header that lacks a column or has one twice, once for the whole file', () => {
    const without = csv({}, {}).split('\n').map(row => row.split(',').filter((_, i) => keys[i] !== 'BSTAR').join(',')).join('\n')
    expect(mustRefuse(readText(without)).errors).toMatchObject([{ code: 'missing', line: 1 }])
    expect(refused(without).message).toContain('The header row lacks BSTAR')
    expect(refused(csv({}).replace('REV_AT_EPOCH', 'EPOCH'))).toMatchObject({ code: 'duplicate-keyword', line: 1 })
  })

  it('takes a header in small letters with a warning for each set', () => {
    const [header, row] = csv({}).split('\n')
    expect(mustRead(readText(`${header!.toLowerCase()}\n${row}`))).toMatchObject({ sets: [{ elements: reference }], warnings: [{ code: 'lower-case' }] })
  })

  it('takes off the apostrophe that guards a formula', () => {
    for (const [field, name] of [['\'=1+1', '=1+1'], ['\'\'=1', '\'=1'], ['\'A', '\'A'], ['=1', '=1']]) expect(onlySet(readText(csv({ OBJECT_NAME: field }))).elements.name).toBe(name)
  })
})
