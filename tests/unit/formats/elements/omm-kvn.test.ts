import { describe, expect, it } from 'vitest'
import { OMM_KEYWORDS } from '#shared/formats/elements/omm/keywords'
import { kvn, mustRead, mustRefuse, omm, onlySet, readText } from './support'

const refusal = (text: string) => mustRefuse(readText(text)).errors[0]!
const reference = onlySet(readText(omm())).elements

describe('an OMM as KVN', () => {
  it('is the set that JSON has, whatever the blanks, tabs and line ends', () => {
    const text = kvn()
    for (const form of [text, text.replaceAll('\n', '\r\n'), text.replaceAll('\n', '\r'), text.replaceAll(' = ', '='), text.replaceAll(' = ', '\t  =\t '), `\n\n  ${text.replaceAll('\n', '  \n\n')}`, `COMMENT made by hand\n${text}`]) {
      const reading = mustRead(readText(form))
      expect(reading.format).toBe('omm-kvn')
      expect(reading.sets.map(set => set.elements)).toEqual([reference])
      expect(reading.warnings).toEqual([])
    }
  })

  it('is read message by message, each from its version line on, with its own text', () => {
    const [a, b, c] = [kvn(), kvn({ NORAD_CAT_ID: 90002, ECCENTRICITY: 'much' }), kvn({ NORAD_CAT_ID: 90003 })]
    const reading = mustRead(readText(`${a}\n${b}${c}`))
    const lines = a.split('\n').length - 1
    expect(reading.sets.map(set => [set.line, set.elements.catalogueNumber, set.text])).toEqual([[1, '90001', a.trim()], [2 * lines + 2, '90003', c.trim()]])
    expect(reading.refusals).toMatchObject([{ name: 'INVENTED', code: 'number', line: lines + 1 + b.split('\n').findIndex(line => line.startsWith('ECCENTRICITY')) + 1 }])
  })

  it('takes the units of the standard and refuses others', () => {
    // Source: CCSDS 502.0-B-3, tables 4-3 and 7.7 (units in brackets, from memory).
    expect(onlySet(readText(kvn({ MEAN_MOTION: '15.21987654 [rev/day]', INCLINATION: '97.4021 [deg]', BSTAR: '0.00031234 [1/ER]', MEAN_MOTION_DOT: '8.123e-05 [rev/day**2]', MEAN_MOTION_DDOT: '0 [ rev/day**3 ]' }))).elements).toEqual(reference)
    for (const [key, value, rule] of [['INCLINATION', '1.7 [rad]', 'given in deg'], ['MEAN_MOTION', '0.0011 [rad/s]', 'given in rev/day'], ['ECCENTRICITY', '0.001 [deg]', 'has no unit'], ['NORAD_CAT_ID', '90001 [1]', 'has no unit']] as const) {
      expect(refusal(kvn({ [key]: value }))).toMatchObject({ code: 'unit' })
      expect(refusal(kvn({ [key]: value })).message).toContain(rule)
    }
    expect(onlySet(readText(kvn({ OBJECT_NAME: 'A [deg]' }))).elements.name).toBe('A [deg]')
  })

  it('passes over comments, covariances and keywords that a sender defines', () => {
    const text = kvn().replace('EPOCH', 'COMMENT = 1\nCOMMENT\nCOMMENT\tEPOCH = never\nEPOCH') + 'GM = 398600.8 [km**3/s**2]\nMASS = 3 [kg]\nCOV_REF_FRAME = TEME\nCX_X = 1e-3\nCZ_DOT_Z_DOT = 1e-9\nUSER_DEFINED_A = 1\nUSER_DEFINED_B = 2\n'
    expect(mustRead(readText(text))).toMatchObject({ warnings: [], sets: [{ elements: reference }] })
    // 21 elements of a symmetric six by six matrix.
    expect(OMM_KEYWORDS.filter(({ key }) => /^C[XYZ]_/.test(key))).toHaveLength(21)
  })

  it('names keywords that are none, and lines that are no keyword', () => {
    const reading = mustRead(readText(`exported tonight\n${kvn({ MEAN_MOTON: 15 })}-- end --\nof file\n`))
    expect(reading.sets).toHaveLength(1)
    expect(reading.warnings.map(w => [w.code, w.line])).toEqual([['stray-line', 1], ['stray-line', 27], ['unknown-keyword', 26]])
    expect(reading.warnings.map(w => w.message).join()).toMatch(/"exported tonight".*Lines 27 to 28 \("-- end --"\).*"MEAN_MOTON" is no keyword/s)
  })

  it.each(['CENTER_NAME', 'REF_FRAME', 'TIME_SYSTEM', 'MEAN_ELEMENT_THEORY'])('refuses a message without %s, on which the meaning of its numbers hangs', (key) => {
    expect(refusal(kvn({ [key]: undefined }))).toMatchObject({ code: 'missing', line: 1 })
    expect(refusal(kvn({ [key]: '' })).message).toMatch(new RegExp(`^${key} is empty`))
  })

  it('warns where a message lacks what is mandatory but decides nothing', () => {
    const reading = mustRead(readText(kvn({ CCSDS_OMM_VERS: undefined, ORIGINATOR: undefined })))
    expect(reading.warnings).toMatchObject([{ code: 'header' }])
    expect(reading.warnings[0]!.message).toContain('CCSDS_OMM_VERS, ORIGINATOR are missing')
  })

  it('takes version 2 and 3, and says so of another', () => {
    expect(mustRead(readText(kvn({ CCSDS_OMM_VERS: '2.0' }))).warnings).toEqual([])
    expect(mustRead(readText(kvn({ CCSDS_OMM_VERS: '4.0' }))).warnings).toMatchObject([{ code: 'version', line: 1 }])
  })

  it('refuses a keyword without its equals sign, on its line', () => {
    expect(refusal(kvn().replace('BSTAR =', 'BSTAR'))).toMatchObject({ code: 'no-equals-sign', line: 22 })
  })

  it('refuses a message of another kind and keeps the OMM beside it', () => {
    const reading = mustRead(readText(`${kvn()}CCSDS_OPM_VERS = 3.0\nOBJECT_NAME = B\nX = 7000\n${kvn({ NORAD_CAT_ID: 90002 })}`))
    expect(reading.sets).toHaveLength(2)
    expect(reading.refusals).toMatchObject([{ code: 'other-message', name: 'B', line: 25 }])
  })

  it('holds no more of one message than any has', () => {
    const long = `${kvn()}${Array.from({ length: 50_000 }, (_, i) => `USER_DEFINED_${i} = 1\n`).join('')}`
    expect(refusal(long)).toMatchObject({ code: 'too-many-keywords', line: 1001 })
  })

  it('takes UNKNOWN, as the standard spells it, for no name and no designator', () => {
    const { elements, warnings } = onlySet(readText(kvn({ OBJECT_NAME: 'UNKNOWN', OBJECT_ID: 'unknown' })))
    expect([elements.name, elements.designator]).toEqual([null, null])
    expect(warnings).toMatchObject([{ code: 'no-name' }])
  })
})
