import { describe, expect, it } from 'vitest'
import { readOmmEpoch } from '#shared/formats/elements/omm/epoch'
import { mustRead, mustRefuse, omm, ommMembers, onlySet, readText } from './support'

const refusal = (changes: Record<string, unknown>) => mustRefuse(readText(omm(changes))).errors[0]!

describe('an OMM as JSON', () => {
  it('is one object or an array of them, with numbers or numeric texts', () => {
    const asText = Object.fromEntries(Object.entries(ommMembers()).map(([key, value]) => [key, String(value)]))
    expect(onlySet(readText(omm())).elements).toEqual(onlySet(readText(JSON.stringify([asText]))).elements)
    expect(onlySet(readText(omm())).elements).toEqual({
      name: 'INVENTED', catalogueNumber: '90001', designator: '2026-801A', epochUtcUs: Date.UTC(2026, 10, 30, 12, 17, 46) * 1000 + 665_888,
      meanMotionRevPerDay: 15.21987654, eccentricity: 0.0012345, inclinationDeg: 97.4021, raanDeg: 45.1234, argPericenterDeg: 87.6543, meanAnomalyDeg: 272.5678,
      bstar: 0.00031234, meanMotionDot: 8.123e-5, meanMotionDdot: 0, classification: 'U', elementSetNumber: 101, revolutionAtEpoch: 4321,
    })
  })

  it.each(['EPOCH', 'MEAN_MOTION', 'ECCENTRICITY', 'INCLINATION', 'RA_OF_ASC_NODE', 'ARG_OF_PERICENTER', 'MEAN_ANOMALY', 'BSTAR', 'MEAN_MOTION_DOT', 'MEAN_MOTION_DDOT'])('never takes a missing, null or empty %s for zero', (key) => {
    for (const value of [undefined, null, '', '  ']) {
      expect(refusal({ [key]: value })).toMatchObject({ code: 'missing' })
      expect(refusal({ [key]: value }).message).toMatch(new RegExp(`^${key} is (missing|empty).*not zero`))
    }
  })

  it('takes null for what the standard leaves open', () => {
    const e = onlySet(readText(omm({ ELEMENT_SET_NO: null, REV_AT_EPOCH: '', CLASSIFICATION_TYPE: null, EPHEMERIS_TYPE: null, BTERM: null }))).elements
    expect([e.elementSetNumber, e.revolutionAtEpoch, e.classification]).toEqual([null, null, 'U'])
  })

  it.each([
    ['INCLINATION', '97.4 deg'], ['INCLINATION', '97,4'], ['INCLINATION', '0x61'], ['INCLINATION', 'NaN'], ['INCLINATION', 'Infinity'], ['MEAN_MOTION', '1e999'],
    ['BSTAR', '1_000'], ['BSTAR', '--1'], ['BSTAR', '.'], ['BSTAR', 'e5'], ['BSTAR', `0.${'0'.repeat(80)}1`], ['NORAD_CAT_ID', '90001.0'], ['NORAD_CAT_ID', '-5'],
    ['NORAD_CAT_ID', '1234567890'], ['NORAD_CAT_ID', 'A0001'], ['REV_AT_EPOCH', 1.5], ['ELEMENT_SET_NO', -1],
  ])('refuses %s "%s" as no number it can trust', (key, value) => {
    expect(refusal({ [key]: value })).toMatchObject({ code: 'number', name: 'INVENTED' })
    expect(refusal({ [key]: value }).message).toContain(key)
  })

  it('refuses a value that is a list, an object or a truth value', () => {
    for (const value of [true, [], {}, [15.2]]) expect(refusal({ MEAN_MOTION: value }).code).toBe('type')
  })

  it.each([
    ['ECCENTRICITY', 1], ['ECCENTRICITY', -1e-9], ['INCLINATION', 180.0001], ['INCLINATION', -0.1], ['MEAN_MOTION', 0], ['MEAN_MOTION', -15], ['MEAN_MOTION', 17.51], ['RA_OF_ASC_NODE', 361], ['MEAN_ANOMALY', -1e9],
  ])('refuses %s %d as out of range', (key, value) => {
    expect(refusal({ [key]: value }).code).toBe('out-of-range')
  })

  it.each([['ECCENTRICITY', 0], ['ECCENTRICITY', 0.9999999], ['INCLINATION', 0], ['INCLINATION', 180], ['MEAN_MOTION', 17.5], ['RA_OF_ASC_NODE', 360], ['BSTAR', -0.01]])('takes %s %d at its edge', (key, value) => {
    expect(mustRead(readText(omm({ [key]: value }))).warnings).toEqual([])
  })

  it.each([
    [{ EPHEMERIS_TYPE: 4 }, 'SGP4-XP'], [{ BTERM: 0.02 }, 'SGP4-XP'], [{ AGOM: 0 }, 'SGP4-XP'], [{ MEAN_ELEMENT_THEORY: 'SGP4-XP' }, 'SGP4-XP'], [{ MEAN_ELEMENT_THEORY: 'DSST' }, 'another theory'],
    [{ TIME_SYSTEM: 'GPS' }, 'UTC'], [{ REF_FRAME: 'GCRF' }, 'TEME'], [{ CENTER_NAME: 'MOON' }, 'EARTH'], [{ SEMI_MAJOR_AXIS: 6878, MEAN_MOTION: null }, 'SEMI_MAJOR_AXIS'],
  ])('refuses %j, which SGP4 in TEME and UTC cannot honour', (changes, naming) => {
    expect(refusal(changes).message).toContain(naming)
  })

  it('takes the conventions of SGP4 when they are stated', () => {
    const stated = { CCSDS_OMM_VERS: '3.0', CREATION_DATE: '2026-11-30T20:00:00', ORIGINATOR: 'REF', CENTER_NAME: 'EARTH', REF_FRAME: 'TEME', TIME_SYSTEM: 'UTC', MEAN_ELEMENT_THEORY: 'SGP/SGP4', COMMENT: ['a', 'b'] }
    expect(mustRead(readText(omm(stated))).warnings).toEqual([])
  })

  it('keeps the good sets beside a bad one, with the line of the bad value', () => {
    const text = `[\n${omm()},\n{\n"OBJECT_NAME": "BAD",\n"EPOCH": "2026-11-30T12:00:00",\n"MEAN_MOTION": "fast"\n},\n${omm({ NORAD_CAT_ID: 90009 })}\n]`
    const reading = mustRead(readText(text))
    expect(reading.sets.map(s => [s.line, s.elements.catalogueNumber])).toEqual([[2, '90001'], [8, '90009']])
    expect(reading.refusals).toMatchObject([{ line: 6, name: 'BAD', code: 'number' }])
  })

  it('refuses one set for a bare NaN or Infinity, and not the file', () => {
    const text = `[${omm()},${omm({ NORAD_CAT_ID: 90009 }).replace('15.21987654', 'NaN')},${omm({ NORAD_CAT_ID: 90010 }).replace('15.21987654', '-Infinity')}]`
    expect(mustRead(readText(text)).refusals.map(r => r.code)).toEqual(['number', 'number'])
  })

  it('takes a keyword in small letters with a warning, and refuses one that stands in both', () => {
    const { MEAN_MOTION, ...rest } = ommMembers()
    const reading = mustRead(readText(JSON.stringify({ ...rest, mean_motion: MEAN_MOTION })))
    expect(reading.warnings).toMatchObject([{ line: 1, code: 'lower-case' }])
    expect(reading.warnings[0]!.message).toContain('"mean_motion" is in small letters')
    expect(refusal({ mean_motion: 15 })).toMatchObject({ code: 'duplicate-keyword' })
  })

  it('keeps unprintable characters out of the name, and the text as it was sent', () => {
    const text = omm({ OBJECT_NAME: 'A\u0000B\u202EC\uD800D' })
    const set = onlySet(readText(text))
    expect(set.elements.name).toBe('A\uFFFDB\uFFFDC\uFFFDD')
    expect(set.text).toBe(text)
    expect(set.warnings.map(w => w.code)).toEqual(['name-characters'])
  })

  it('is not misled by keywords that an object has by nature', () => {
    const text = `{"__proto__":{"BSTAR":1},"constructor":1,${omm({ BSTAR: undefined }).slice(1)}`
    expect(mustRefuse(readText(text)).errors[0]).toMatchObject({ code: 'missing' })
    expect(({} as Record<string, unknown>).BSTAR).toBeUndefined()
  })

  it('spells numbers of up to nine digits without leading zeros', () => {
    expect(onlySet(readText(omm({ NORAD_CAT_ID: '00005' }))).elements.catalogueNumber).toBe('5')
    expect(onlySet(readText(omm({ NORAD_CAT_ID: 799500123 }))).elements.catalogueNumber).toBe('799500123')
  })

  it('refuses an empty array', () => {
    expect(mustRefuse(readText('[]')).errors[0]!.code).toBe('no-sets')
  })
})

describe('an OMM\'s epoch', () => {
  const us = (text: string) => {
    const epoch = readOmmEpoch(text)
    return epoch.ok ? epoch.epochUtcUs : epoch.message
  }

  it('is read as calendar or day-of-year date, with or without fraction and Z', () => {
    // Source: CCSDS 502.0-B-3 §7.5.10 (from memory); day 334 of 2026 is 30 November.
    const noon = Date.UTC(2026, 10, 30, 12) * 1000
    for (const text of ['2026-11-30T12:00:00', '2026-11-30T12:00:00Z', '2026-11-30T12:00:00.000000000', '2026-334T12:00:00', '2026-334T12:00:00.0Z', '2026-11-30 12:00:00']) expect(us(text)).toBe(noon)
    expect(us('2026-11-30T12:00:00.1234567')).toBe(noon + 123_457)
    expect(us('2026-11-30T12:00:00.9999999')).toBe(noon + 1_000_000)
    expect(readOmmEpoch('2026-11-30t12:00:00z')).toMatchObject({ epochUtcUs: noon, warning: { code: 'lower-case' } })
    expect(us('2024-366T00:00:00')).toBe(Date.UTC(2024, 11, 31) * 1000)
    expect(us('2024-02-29T00:00:00')).toBe(Date.UTC(2024, 1, 29) * 1000)
  })

  it.each([
    '2026-02-29T00:00:00', '2026-13-01T00:00:00', '2026-00-10T00:00:00', '2026-04-31T00:00:00', '2026-366T00:00:00', '2026-000T00:00:00', '2026-11-30T24:00:00', '2026-11-30T12:60:00', '2026-11-30T12:00:61',
    '2026-11-30T12:00:00+02:00', '2026-11-30', '30.11.2026 12:00', '1901-01-01T00:00:00', '9999-01-01T00:00:00', '1796041066', ' ', '2026-11-30T12:00:00.', '2026-11-30T12:00:00ZZ', '2026-11-30T12:00:60',
    '2016-12-30T23:59:60', '2015-12-31T23:59:60',
  ])('is refused as %s, with how to mend it', (text) => {
    expect(us(text)).toMatch(/must be|Correct/)
  })

  it('in a leap second keeps the time since the midnight after it right, and warns', () => {
    // Source: the leap second at the end of 2016 (IERS Bulletin C 52): 23:59:60.5 is half a second before midnight.
    const epoch = readOmmEpoch('2016-12-31T23:59:60.500000')
    expect(epoch).toMatchObject({ ok: true, epochUtcUs: Date.UTC(2017, 0, 1) * 1000 - 500_000, warning: { code: 'leap-second' } })
    expect(readOmmEpoch('2016-366T23:59:60.5')).toEqual(epoch)
  })
})
