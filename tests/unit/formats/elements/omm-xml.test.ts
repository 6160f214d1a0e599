import { XMLValidator } from 'fast-xml-parser'
import { describe, expect, it } from 'vitest'
import { mustRead, mustRefuse, omm, onlySet, readText, xml } from './support'

const refused = (text: string) => mustRefuse(readText(text)).errors[0]!
const reference = onlySet(readText(omm())).elements
const ndm = (...messages: string[]) => `<?xml version="1.0" encoding="UTF-8"?>\n<ndm>\n${messages.join('\n')}\n</ndm>`

describe('an OMM as XML', () => {
  it('is the set that JSON has, in one omm or an ndm, with or without prefixes', () => {
    const prefixed = xml().replace(/<(\/?)(?=[a-zA-Z])/g, '<$1n:').replace('<n:omm', '<n:omm xmlns:n="urn:ccsds:schema:ndmxml"')
    for (const form of [xml(), `<?xml version="1.0"?>\n${xml()}`, prefixed, ndm(xml()), xml().replaceAll('\n', '\r\n'), `<!-- a --><?note b?>${xml()}<!-- c -->\n`]) {
      const reading = mustRead(readText(form))
      expect(reading).toMatchObject({ format: 'omm-xml', warnings: [], refusals: [] })
      expect(reading.sets.map(set => set.elements)).toEqual([reference])
    }
  })

  it('keeps the good messages beside a bad one, each with its own text and the line of the bad value', () => {
    const [a, b, c] = [xml(), xml({ NORAD_CAT_ID: 90002, INCLINATION: 'steep' }), xml({ NORAD_CAT_ID: 90003 })]
    const reading = mustRead(readText(ndm(a, '<COMMENT>one</COMMENT>', b, '<opm id="CCSDS_OPM_VERS" version="3.0"><body/></opm>', c)))
    expect(reading.sets.map(set => [set.elements.catalogueNumber, set.text])).toEqual([['90001', a], ['90003', c]])
    expect(reading.refusals.map(r => [r.code, r.line])).toEqual([['number', 3 + a.split('\n').length + 1 + b.split('\n').findIndex(line => line.includes('INCLINATION'))], ['other-message', 3 + a.split('\n').length + 1 + b.split('\n').length]])
    expect(reading.refusals[0]!.name).toBe('INVENTED')
  })

  it('resolves the five predefined references and numbers, and sections of character data', () => {
    expect(onlySet(readText(xml({ OBJECT_NAME: 'A &amp; B &lt;&gt;&quot;&apos; &#67;&#x44; <![CDATA[<&]]>' }))).elements.name).toBe('A & B <>"\' CD <&')
  })

  it.each([
    ['a document type', `<!DOCTYPE omm>\n${xml()}`, 'xml-dtd', 1], ['a document type after the declaration', `<?xml version="1.0"?>\n<!DOCTYPE omm SYSTEM "http://invented.example/x.dtd">${xml()}`, 'xml-dtd', 2],
    ['an entity that nothing declares', xml({ OBJECT_NAME: 'A &nbsp; B' }), 'xml-entity', 8], ['an entity in an attribute', xml().replace('version="3.0"', 'version="&v;"'), 'xml-entity', 1],
    ['an external entity', `<!DOCTYPE omm [<!ENTITY x SYSTEM "file:///etc/passwd">]>${xml({ OBJECT_NAME: '&x;' })}`, 'xml-dtd', 1], ['a bare ampersand', xml({ OBJECT_NAME: 'A & B' }), 'xml-entity', 8],
    ['a number beyond Unicode', xml({ OBJECT_NAME: '&#x110000;' }), 'xml-entity', 8], ['half a surrogate pair', xml({ OBJECT_NAME: '&#xD800;' }), 'xml-entity', 8],
  ])('is refused unread with %s', (_, text, code, line) => {
    expect(refused(text)).toMatchObject({ code, line })
  })

  it.each([
    ['a tag closed by another', xml().replace('</EPOCH>', '</EPOK>')], ['a tag that is not closed', xml().replace('</omm>', '')], ['an end without a beginning', `${xml()}</omm>`], ['a tag cut short', '<omm><body'],
    ['an attribute without quotes', xml().replace('"3.0"', '3.0')], ['an attribute twice', xml().replace('version="3.0"', 'version="3.0" version="2.0"')],
    ['no blank between attributes', xml().replace('" version', '"version')], ['a comment that is not closed', `${xml()}<!-- `], ['character data that is not closed', xml({ OBJECT_NAME: '<![CDATA[' })],
    ['two outermost elements', `${xml()}${xml()}`], ['a name that is none', xml().replace('<EPOCH>', '<5EPOCH>')],
  ])('that is not well formed is refused whole, with its place: %s', (_, text) => {
    // Source: fast-xml-parser 5, a general parser, finds none of them well formed either.
    expect(XMLValidator.validate(text)).not.toBe(true)
    const error = refused(text)
    expect(error.code).toBe('xml')
    expect(error.message).toMatch(/^Not readable as XML at line \d+, column \d+: .*mend it there/)
  })

  it('is held to the standard where that parser is lenient', () => {
    // Source: XML 1.0, section 3.1 (no "<" in attribute values) and 2.6 (instructions end in "?>").
    for (const text of [xml().replace('"3.0"', '"<"'), `${xml()}<?x`]) expect(refused(text).code).toBe('xml')
  })

  it('warns of text after its end and takes what stands before', () => {
    expect(mustRead(readText(`${xml()}\nbye`))).toMatchObject({ sets: [{ elements: reference }], warnings: [{ code: 'trailing-text', line: 26 }] })
  })

  it('refuses a message whose tags lost text between them', () => {
    expect(refused(xml().replace('<BSTAR>', '0.1<BSTAR>'))).toMatchObject({ code: 'stray-text' })
  })

  it('takes the units of the standard and refuses others, on their line', () => {
    const withUnits = (units: string) => xml().replace('<INCLINATION>', `<INCLINATION units="${units}">`)
    expect(onlySet(readText(withUnits('deg'))).elements).toEqual(reference)
    expect(refused(withUnits('rad'))).toMatchObject({ code: 'unit', line: 13 })
  })

  it('passes over parameters that a sender defines, and names elements that are none', () => {
    const inside = '<userDefinedParameters><USER_DEFINED parameter="A">1</USER_DEFINED><USER_DEFINED parameter="B">2</USER_DEFINED></userDefinedParameters><covarianceMatrix/>'
    expect(mustRead(readText(xml({}, inside))).warnings).toEqual([])
    expect(mustRead(readText(xml({}, '<MEAN_MOTON>1</MEAN_MOTON>'))).warnings).toMatchObject([{ code: 'unknown-keyword', line: 25 }])
  })

  it('refuses a value that stands twice, and a message without its conventions', () => {
    expect(refused(xml({}, '<BSTAR>0</BSTAR>'))).toMatchObject({ code: 'duplicate-keyword', line: 25 })
    expect(refused(xml({ TIME_SYSTEM: undefined }))).toMatchObject({ code: 'missing', line: 1 })
  })

  it('says what else the XML is', () => {
    expect(refused('<?xml version="1.0"?>\n<kml><omm/></kml>')).toMatchObject({ code: 'xml-root', line: 2 })
    expect(refused(ndm())).toMatchObject({ code: 'no-sets' })
  })

  it('never overflows on depth, and never grows on references', () => {
    expect(refused(`<omm>${'<a>'.repeat(50_000)}`)).toMatchObject({ code: 'xml-limit' })
    expect(refused(xml({ OBJECT_NAME: 'a'.repeat(150_000) }))).toMatchObject({ code: 'xml-limit' })
    expect(refused(xml({ OBJECT_NAME: '&amp;'.repeat(200_000) }))).toMatchObject({ code: 'xml-limit' })
  })
})
