import { XMLParser, XMLValidator } from 'fast-xml-parser'
import fc from 'fast-check'
import { json2satrec, twoline2satrec } from 'satellite.js'
import { describe, expect, it } from 'vitest'
import { ELEMENT_NOTATIONS, whyNoTle, writeElements } from '#shared/formats/elements/write/write-elements'
import type { ElementNotation } from '#shared/formats/elements/write/write-elements'
import type { MeanElements } from '#shared/physics/types'
import { elements, tleElements } from './random-elements'
import { LINE_1, LINE_2, NOW_MS, mustRead, omm, onlySet, readText, referenceText, withChecksum } from './support'

const origin = { createdMs: NOW_MS, originator: 'REF' }
const write = (sets: MeanElements | MeanElements[], notation: ElementNotation) => {
  const written = writeElements([sets].flat(), notation, origin)
  if (!written.ok) throw new Error(written.reason)
  return written
}
const readBack = (text: string) => mustRead(readText(text)).sets.map(set => set.elements)
const invented = onlySet(readText(omm())).elements
const OMM_NOTATIONS = ELEMENT_NOTATIONS.filter(notation => notation !== 'tle')

/**
 * One set in three notations. Source: the examples of chapter 4 of CCSDS 502.0-B (from memory: they print one set as a TLE and
 * as an OMM; the check digits and the agreement of both epochs hold the memory), names replaced by invented ones.
 */
const PUBLISHED_TLE = '1 23581U 95025A   07064.44075725 -.00000113  00000-0  10000-3 0  9250\n2 23581   3.0539  81.7939 0005013 249.2363 150.1602  1.00273272 43169\n'
const PUBLISHED_OMM = {
  CCSDS_OMM_VERS: '2.0', CREATION_DATE: '2007-065T16:00:00', ORIGINATOR: 'REF', OBJECT_NAME: 'INVENTED GEO', OBJECT_ID: '1995-025A', CENTER_NAME: 'EARTH', REF_FRAME: 'TEME', TIME_SYSTEM: 'UTC', MEAN_ELEMENT_THEORY: 'SGP/SGP4',
  EPOCH: '2007-064T10:34:41.4264', MEAN_MOTION: '1.00273272', ECCENTRICITY: '0.0005013', INCLINATION: '3.0539', RA_OF_ASC_NODE: '81.7939', ARG_OF_PERICENTER: '249.2363', MEAN_ANOMALY: '150.1602', GM: '398600.8',
  EPHEMERIS_TYPE: '0', CLASSIFICATION_TYPE: 'U', NORAD_CAT_ID: '23581', ELEMENT_SET_NO: '0925', REV_AT_EPOCH: '4316', BSTAR: '0.0001', MEAN_MOTION_DOT: '-0.00000113', MEAN_MOTION_DDOT: '0.0',
}
const publishedKvn = Object.entries(PUBLISHED_OMM).map(([key, value]) => `${key} = ${value}\n`).join('')

describe('the published example', () => {
  it('is the same set as TLE and as OMM, and each is written as the other', () => {
    const [fromKvn] = readBack(publishedKvn)
    const [fromTle] = readBack(`INVENTED GEO\n${PUBLISHED_TLE}`)
    expect(fromKvn).toEqual(fromTle)
    expect(write(fromKvn!, 'tle')).toEqual({ ok: true, text: `INVENTED GEO\n${PUBLISHED_TLE}`, changed: [] })
    const kvn = Object.fromEntries(write(fromTle!, 'kvn').text.trim().split('\n').map(line => line.split(/\s*=\s*/)))
    for (const key of ['OBJECT_ID', 'CENTER_NAME', 'REF_FRAME', 'TIME_SYSTEM', 'MEAN_MOTION', 'ECCENTRICITY', 'INCLINATION', 'RA_OF_ASC_NODE', 'ARG_OF_PERICENTER', 'MEAN_ANOMALY', 'NORAD_CAT_ID', 'BSTAR'] as const) expect(kvn[key], key).toBe(PUBLISHED_OMM[key])
    // Day 64 of 2007 is 5 March.
    expect(kvn).toMatchObject({ EPOCH: '2007-03-05T10:34:41.426400', CREATION_DATE: '2026-11-30T18:00:00', ORIGINATOR: 'REF', CCSDS_OMM_VERS: '3.0', MEAN_MOTION_DOT: '-0.00000113' })
  })
})

describe('a TLE that came in', () => {
  const lines = (JSON.parse(referenceText('sgp4-verification.json')) as { cases: { line1: string, line2: string }[] }).cases
  /** Zero has two spellings, and some cases of the run print a day or a number with blanks for zeros. */
  const spelled = (line: string) => withChecksum(line.replace(/^(1 .{42})[ +-]00000[+-]0/, '$1 00000-0').replace(/^(1 .{51})[ +-]00000[+-]0/, '$1 00000-0').replace(/^(1 .{18}) {1,2}(?=\d)/, (_, head: string) => `${head}${'0'.repeat(_.length - head.length)}`))

  it('goes out with the same columns, over the published verification elements', () => {
    // Source: AIAA 2006-6753; designators and counters that were left blank there are no numbers of the orbit.
    let compared = 0
    for (const { line1, line2 } of lines) {
      const [e] = readBack(`${withChecksum(line1)}\n${withChecksum(line2)}\n`)
      const [out1, out2] = write(e!, 'tle').text.split('\n') as [string, string]
      expect(out1.slice(18, 61), line1).toBe(spelled(line1).slice(18, 61))
      expect(out2.slice(0, 63), line2).toBe(line2.slice(0, 63))
      expect(readBack(`${out1}\n${out2}`)[0]).toEqual({ ...e, elementSetNumber: e!.elementSetNumber ?? 0, revolutionAtEpoch: e!.revolutionAtEpoch ?? 0, designator: /^\d{4}-/.test(e!.designator ?? '') ? e!.designator : null })
      compared++
    }
    expect(compared).toBe(33)
  })

  it('goes out as it is, name included', () => {
    const text = `INVENTED\n${LINE_1.replace('00000+0', '00000-0').slice(0, 68)}`
    expect(write(readBack(`INVENTED\n${LINE_1}\n${LINE_2}`)[0]!, 'tle').text).toBe(`INVENTED\n${withChecksum(text.split('\n')[1]!)}\n${LINE_2}\n`)
  })
})

describe('a set written as TLE', () => {
  it('reads back to half of its last printed digit, over random elements', () => {
    fc.assert(fc.property(tleElements, (e) => {
      const written = writeElements([e], 'tle', origin)
      if (!written.ok) {
        // Only B* and the derivatives can be too large for their columns here.
        expect(written.reason).toMatch(/no columns for the (BSTAR|MEAN_MOTION)/)
        return
      }
      const [r] = readBack(written.text)
      const near = (keyword: string, a: number, b: number, half: number) => {
        expect(Math.abs(a - b)).toBeLessThanOrEqual(half * (1 + 1e-9))
        if (a !== b) expect(written.changed).toContain(keyword)
      }
      const turn = (value: number) => ((value % 360) + 360) % 360
      const angle = (a: number, b: number) => expect(Math.min(turn(a - b), turn(b - a))).toBeLessThanOrEqual(0.5000001e-4)
      expect([r!.name, r!.catalogueNumber, r!.designator, r!.classification]).toEqual([e.name, e.catalogueNumber, e.designator, e.classification])
      near('EPOCH', r!.epochUtcUs, e.epochUtcUs, 432)
      near('INCLINATION', r!.inclinationDeg, e.inclinationDeg, 0.5e-4)
      near('ECCENTRICITY', r!.eccentricity, e.eccentricity, 0.5e-7)
      near('MEAN_MOTION', r!.meanMotionRevPerDay, e.meanMotionRevPerDay, 0.5e-8)
      near('MEAN_MOTION_DOT', r!.meanMotionDot, e.meanMotionDot, 0.5e-8)
      near('BSTAR', r!.bstar, e.bstar, Math.max(0.5e-14, Math.abs(e.bstar) * 0.5e-4))
      near('MEAN_MOTION_DDOT', r!.meanMotionDdot, e.meanMotionDdot, Math.max(0.5e-14, Math.abs(e.meanMotionDdot) * 0.5e-4))
      angle(r!.raanDeg, e.raanDeg)
      angle(r!.argPericenterDeg, e.argPericenterDeg)
      angle(r!.meanAnomalyDeg, e.meanAnomalyDeg)
      // Written again, it is the same text: nothing drifts.
      expect(write(r!, 'tle').text).toBe(written.text)
    }), { numRuns: 600, seed: 20261130 })
  })

  it('is read by an independent library as the OMM of the same set is', () => {
    // Source: satellite.js 7.1.0, which reads both notations.
    const [line1, line2] = write({ ...invented, name: null }, 'tle').text.split('\n')
    const [fromTle, fromOmm] = [twoline2satrec(line1!, line2!), json2satrec((JSON.parse(write(invented, 'json').text) as never[])[0]!)]
    for (const key of ['inclo', 'nodeo', 'argpo', 'mo', 'ecco', 'no', 'bstar'] as const) expect(fromTle[key], key).toBeCloseTo(fromOmm[key], 13)
    expect(Math.abs(fromTle.jdsatepoch - fromOmm.jdsatepoch)).toBeLessThan(2e-8)
  })

  it('names what it rounds', () => {
    expect(write(invented, 'tle').changed).toEqual([])
    // A TLE's last decimal of a day is 864 µs.
    expect(write({ ...invented, epochUtcUs: invented.epochUtcUs + 1 }, 'tle')).toMatchObject({ changed: ['EPOCH'], text: write(invented, 'tle').text })
    expect([...write({ ...invented, inclinationDeg: 97.40214, raanDeg: -10, revolutionAtEpoch: 104_321, classification: 'XX', designator: 'TBD' }, 'tle').changed].sort()).toEqual(['CLASSIFICATION_TYPE', 'INCLINATION', 'OBJECT_ID', 'RA_OF_ASC_NODE', 'REV_AT_EPOCH'])
  })

  it('carries numbers up to 339999 in Alpha-5, and says where it cannot', () => {
    // Source: the published Alpha-5 scheme: J2931 is 182931, Z9999 is 339999.
    for (const [number, columns] of [['5', '00005'], ['99999', '99999'], ['100000', 'A0000'], ['182931', 'J2931'], ['339999', 'Z9999']]) expect(write({ ...invented, name: null, catalogueNumber: number! }, 'tle').text.slice(2, 7)).toBe(columns)
    const reason = (change: Partial<MeanElements>) => {
      const written = writeElements([{ ...invented, ...change }], 'tle', origin)
      return written.ok ? written.text : written.reason
    }
    expect(reason({ catalogueNumber: '340000' })).toMatch(/cannot carry catalogue number 340000.*end at 339999.*Take it as OMM/)
    expect(reason({ catalogueNumber: null })).toMatch(/needs a catalogue number/)
    expect(reason({ epochUtcUs: Date.UTC(2057, 0, 1) * 1000 })).toMatch(/outside 1957 to 2056/)
    expect(reason({ eccentricity: 0.99999999 })).toMatch(/no columns for the ECCENTRICITY of INVENTED/)
    expect(reason({ bstar: 1e10 })).toMatch(/no columns for the BSTAR/)
    expect(reason({ meanMotionDot: -1 })).toMatch(/no columns for the MEAN_MOTION_DOT/)
    expect(whyNoTle(invented)).toBeNull()
  })

  it('rounds an epoch at the end of a year into the next', () => {
    const at = (us: number) => write({ ...invented, name: null, epochUtcUs: us }, 'tle').text.slice(18, 32)
    expect(at(Date.UTC(2027, 0, 1) * 1000 - 1)).toBe('27001.00000000')
    expect(at(Date.UTC(2024, 11, 31) * 1000)).toBe('24366.00000000')
    expect(at(Date.UTC(1957, 9, 5) * 1000)).toBe('57278.00000000')
  })
})

describe('a set written as OMM', () => {
  it.each(OMM_NOTATIONS)('reads back from %s to the same elements and microsecond, over random elements', (notation) => {
    fc.assert(fc.property(elements, (e) => {
      expect(readBack(write(e, notation).text)).toEqual([e])
    }), { numRuns: 500, seed: 20261130 })
  })

  it.each(ELEMENT_NOTATIONS)('stands beside others in one file of %s', (notation) => {
    const sets = ['90001', '90002', '90003'].map(catalogueNumber => ({ ...invented, catalogueNumber }))
    expect(readBack(write(sets, notation).text)).toEqual(sets)
  })

  it.each(OMM_NOTATIONS)('reads back from %s without a warning', (notation) => {
    const sets = mustRead(readText(referenceText('uploads/omm_good.json'))).sets.map(set => set.elements)
    const reading = mustRead(readText(write(sets, notation).text))
    expect(reading.warnings).toEqual([])
    expect(reading.sets.map(set => set.elements)).toEqual(sets)
  })

  it('is XML that an independent parser finds well formed and reads alike', () => {
    // Source: fast-xml-parser 5, a general XML parser.
    const parser = new XMLParser({ ignoreAttributes: false, parseTagValue: false })
    fc.assert(fc.property(elements, (e) => {
      const text = write(e, 'xml').text
      expect(XMLValidator.validate(text)).toBe(true)
      const { omm: parsed } = parser.parse(text) as { omm: { '@_version': string, 'body': { segment: { metadata: Record<string, string>, data: { meanElements: Record<string, string>, tleParameters: Record<string, string> } } } } }
      const { metadata, data: { meanElements, tleParameters } } = parsed.body.segment
      expect(parsed['@_version']).toBe('3.0')
      expect([Number(meanElements.MEAN_MOTION), Number(meanElements.ECCENTRICITY), Number(meanElements.INCLINATION), Number(tleParameters.BSTAR)]).toEqual([e.meanMotionRevPerDay, e.eccentricity, e.inclinationDeg, e.bstar])
      expect(metadata).toMatchObject({ OBJECT_NAME: e.name ?? 'UNKNOWN', CENTER_NAME: 'EARTH', REF_FRAME: 'TEME', TIME_SYSTEM: 'UTC', MEAN_ELEMENT_THEORY: 'SGP4' })
    }), { numRuns: 200, seed: 20261130 })
  })

  it('is JSON whose numbers are numbers, null where nothing is known', () => {
    const [object] = JSON.parse(write({ ...invented, catalogueNumber: null, elementSetNumber: null }, 'json').text) as Record<string, unknown>[]
    expect(object).toMatchObject({ OBJECT_NAME: 'INVENTED', EPOCH: '2026-11-30T12:17:46.665888', MEAN_MOTION: 15.21987654, BSTAR: 0.00031234, REV_AT_EPOCH: 4321, NORAD_CAT_ID: null, ELEMENT_SET_NO: null })
  })

  it('has a formula for a name guarded in CSV, and no number', () => {
    const text = write({ ...invented, name: '=1+1', bstar: -1e-7 }, 'csv').text
    expect(text).toContain('\r\n\'=1+1,2026-801A,')
    expect(text).toContain(',-1.0e-7,')
  })

  it('keeps the small print of the standard: header first, units as agreed, unknown names said', () => {
    const kvn = write({ ...invented, name: null, designator: null }, 'kvn').text.split('\n')
    expect(kvn[0]).toMatch(/^CCSDS_OMM_VERS\s+= 3\.0$/)
    expect(kvn.filter(line => line.endsWith('= UNKNOWN')).map(line => line.split(/\s/)[0])).toEqual(['OBJECT_NAME', 'OBJECT_ID'])
  })
})
