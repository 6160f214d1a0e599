import { json2satrec, twoline2satrec } from 'satellite.js'
import { describe, expect, it } from 'vitest'
import { spellOutCatalogueNumber } from '#shared/formats/elements/tle/alpha5'
import { tleChecksum } from '#shared/formats/elements/tle/checksum'
import { LINE_1, LINE_2, mustRead, mustRefuse, omm, onlySet, put, readText, referenceText, withChecksum } from './support'

const one = (line1: string, line2 = LINE_2) => readText(`${line1}\n${line2}\n`)
const refusal = (line1: string, line2 = LINE_2) => mustRefuse(one(line1, line2)).errors[0]!

/** The published verification run's elements (AIAA 2006-6753), as printed there. */
const verification = (JSON.parse(referenceText('sgp4-verification.json')) as { cases: { line1: string, line2: string }[] }).cases

describe('a TLE', () => {
  it('reads as an independent library reads it, over the published verification elements', () => {
    // Source: satellite.js 7.1.0, an SGP4 library; its record is in radians, radians a minute and Julian days.
    let compared = 0
    for (const { line1, line2 } of verification) {
      // Some cases of the run were made by hand and keep an old check digit.
      const { elements: e } = onlySet(readText(`${withChecksum(line1)}\n${withChecksum(line2)}\n`))
      const satrec = twoline2satrec(line1, line2)
      const rad = Math.PI / 180
      expect(e.inclinationDeg * rad).toBeCloseTo(satrec.inclo, 14)
      expect(e.raanDeg * rad).toBeCloseTo(satrec.nodeo, 13)
      expect(e.argPericenterDeg * rad).toBeCloseTo(satrec.argpo, 13)
      expect(e.meanAnomalyDeg * rad).toBeCloseTo(satrec.mo, 13)
      expect(e.eccentricity).toBe(satrec.ecco)
      expect(e.bstar).toBeCloseTo(satrec.bstar, 15)
      const julianUs = (satrec.jdsatepoch - 2440587.5) * 86400e6
      expect(Math.abs(e.epochUtcUs - julianUs)).toBeLessThan(50)
      expect(Number(e.catalogueNumber)).toBe(Number(satrec.satnum))
      compared++
    }
    expect(compared).toBe(33)
  })

  it('takes a mean motion up to 17.5 revolutions a day', () => {
    expect(onlySet(one(LINE_1, put(LINE_2, 53, '17.50000000'))).elements.meanMotionRevPerDay).toBe(17.5)
    expect(refusal(LINE_1, put(LINE_2, 53, '17.50000001'))).toMatchObject({ line: 2, code: 'out-of-range' })
    expect(refusal(LINE_1, put(LINE_2, 53, ' 0.00000000'))).toMatchObject({ line: 2, code: 'out-of-range' })
  })

  it('gives the checksum printed on published lines', () => {
    // Source: lines of AIAA 2006-6753, each with its printed check digit.
    expect(tleChecksum('1 00005U 58002B   00179.78495062  .00000023  00000-0  28098-4 0  4753')).toBe(3)
    expect(tleChecksum('2 00005  34.2682 348.7242 1859667 331.7664  19.3264 10.82419157413667')).toBe(7)
    expect(tleChecksum('1 04632U 70093B   04031.91070959 -.00000084  00000-0  10000-3 0  9955')).toBe(5)
    expect(tleChecksum('1 16925U 86065D   06151.67415771  .02550794 -30915-6  18784-3 0  4486')).toBe(6)
  })

  it('spells out catalogue numbers', () => {
    // Source: the published Alpha-5 scheme: A = 10, J = 18, P = 23, Z = 33, without I and O.
    const pairs = [['00005', '5'], ['    5', '5'], ['90001', '90001'], ['A0000', '100000'], ['J2931', '182931'], ['P0000', '230000'], ['Z9999', '339999'], ['a0001', '100001']]
    for (const [columns, number] of pairs) expect(spellOutCatalogueNumber(columns!)).toBe(number)
    for (const wrong of ['I0000', 'O0000', '     ', '9 001', 'AA001', '  A01', '9000\u0661']) expect(spellOutCatalogueNumber(wrong)).toBeNull()
  })

  it('turns years 57 to 99 into 19xx and 00 to 56 into 20xx', () => {
    // Source: the published format.
    const year = (twoDigits: string) => new Date(onlySet(one(put(LINE_1, 19, `${twoDigits}001.00000000`))).elements.epochUtcUs / 1000).toISOString().slice(0, 4)
    expect(['57', '99', '00', '26'].map(year)).toEqual(['1957', '1999', '2000', '2026'])
    expect(new Date(mustRead(one(put(LINE_1, 19, '56001.00000000'))).sets[0]!.elements.epochUtcUs / 1000).getUTCFullYear()).toBe(2056)
  })

  it('keeps every digit of the epoch: the last decimal of a day is 864 microseconds', () => {
    // Source: arithmetic. 0.51234567 · 86 400 s = 44 266.665888 s = 12:17:46.665888.
    const epoch = (day: string) => onlySet(one(put(LINE_1, 21, day))).elements.epochUtcUs
    expect(epoch('334.51234567')).toBe(Date.UTC(2026, 10, 30, 12, 17, 46) * 1000 + 665_888)
    expect(epoch('334.51234568') - epoch('334.51234567')).toBe(864)
    expect(epoch('334.99999999')).toBe(Date.UTC(2026, 11, 1) * 1000 - 864)
    expect(epoch('  1.00000000')).toBe(Date.UTC(2026, 0, 1) * 1000)
  })

  it('knows that a leap year has a day 366', () => {
    const reading = mustRead(one(put(LINE_1, 19, '24366.50000000')))
    expect(reading.sets[0]!.elements.epochUtcUs).toBe(Date.UTC(2024, 11, 31, 12) * 1000)
    expect(reading.warnings).toEqual([])
    expect(refusal(put(LINE_1, 19, '24367.00000000')).message).toContain('1 to 366')
  })

  it('reads signs and powers of ten as printed', () => {
    const e = onlySet(one(put(put(put(LINE_1, 34, '-.00000084'), 45, '-30915-6'), 54, '-11606+1'))).elements
    expect([e.meanMotionDot, e.meanMotionDdot, e.bstar]).toEqual([-0.00000084, -0.30915e-6, -1.1606])
    expect(Object.is(onlySet(one(put(LINE_1, 54, '-00000-0'))).elements.bstar, 0)).toBe(true)
  })

  it('never takes a blank for a zero', () => {
    const blanks: [string, string, string][] = [
      [put(LINE_1, 54, '        '), LINE_2, 'B*'], [put(LINE_1, 34, '          '), LINE_2, 'First derivative'], [LINE_1, put(LINE_2, 9, '        '), 'Inclination'],
      [LINE_1, put(LINE_2, 27, '       '), 'Eccentricity'], [LINE_1, put(LINE_2, 53, '           '), 'Mean motion'],
    ]
    for (const [line1, line2, label] of blanks) {
      expect(refusal(line1, line2)).toMatchObject({ code: 'missing' })
      expect(refusal(line1, line2).message).toMatch(new RegExp(`^${label.replace('*', '\\*')}.*not zero`))
    }
    const counters = onlySet(one(put(put(LINE_1, 65, '    '), 63, ' '), put(LINE_2, 64, '     '))).elements
    expect([counters.elementSetNumber, counters.revolutionAtEpoch]).toEqual([null, null])
  })

  it('reads numbers strictly', () => {
    for (const text of ['97.4 021', '97.4021e', ' 97,4021', ' 0x61.00', '  974021', ' +-7.402']) {
      expect(refusal(LINE_1, put(LINE_2, 9, text)), text).toMatchObject({ line: 2, code: 'number' })
    }
    expect(refusal(LINE_1, put(LINE_2, 27, '0.12345'))).toMatchObject({ code: 'number' })
    expect(refusal(put(LINE_1, 54, ' 3.234-3'))).toMatchObject({ line: 1, code: 'number' })
  })

  it('refuses a single changed digit by its checksum, and says both digits', () => {
    const { line, code, message } = refusal(LINE_1, LINE_2.replace('97.4021', '97.4022'))
    expect({ line, code }).toEqual({ line: 2, code: 'checksum' })
    expect(message).toMatch(/is "7".*give 8/)
  })

  it('refuses two lines of different objects', () => {
    expect(refusal(LINE_1, put(LINE_2, 3, '90002'))).toMatchObject({ line: 2, code: 'number-mismatch' })
  })

  it('refuses SGP4-XP, whose elements this propagator cannot honour', () => {
    expect(refusal(put(LINE_1, 63, '4'))).toMatchObject({ line: 1, code: 'theory' })
    expect(refusal(put(LINE_1, 63, '4')).message).toContain('SGP4-XP')
  })

  it('refuses shifted and cut lines and names the column', () => {
    expect(refusal(` ${LINE_1}`).message).toMatch(/begins with a blank in column 1/)
    expect(refusal(LINE_1.slice(0, 40)).message).toMatch(/has 40 columns where 69 belong/)
    expect(refusal(`${LINE_1}0`).code).toBe('length')
    expect(refusal(put(LINE_1, 33, '1')).message).toMatch(/Column 33 holds "1" where a blank belongs/)
  })

  it('leaves out text after column 69 with a warning, and blanks and tabs without one', () => {
    expect(mustRead(one(`${LINE_1}  seen`)).warnings).toMatchObject([{ line: 1, code: 'trailing-text' }])
    expect(mustRead(one(`${LINE_1} \t `, `${LINE_2}\t`)).warnings).toEqual([])
  })

  it('tells of lines that belong to no set, in one warning for a run of them', () => {
    const reading = mustRead(readText(`made by hand\nsecond\nINVENTED\n${LINE_1}\n${LINE_2}\nthe end\n`))
    expect(reading.sets).toMatchObject([{ line: 4, elements: { name: 'INVENTED' } }])
    expect(reading.warnings.map(w => [w.line, w.code])).toEqual([[1, 'stray-line'], [6, 'stray-line']])
    expect(reading.warnings[0]!.message).toContain('Lines 1 to 2')
  })

  it('takes a short line of a few numbers for a name', () => {
    for (const name of ['1 2', '2 of 3', '1 - 1', '2 4 6 8', '1 X9']) expect(onlySet(readText(`${name}\n${LINE_1}\n${LINE_2}`)).elements.name).toBe(name)
  })

  it('keeps the original text of each set, name line included', () => {
    const text = `0 INVENTED\r\n${LINE_1}\r\n\r\n${LINE_2}\r\n`
    expect(onlySet(readText(text)).text).toBe(text.trimEnd())
  })

  it('warns of an epoch more than a day ahead, and not of one less', () => {
    // Now is 18:00 on day 334.
    expect(mustRead(one(put(LINE_1, 21, '335.75000001'))).warnings).toMatchObject([{ code: 'epoch-ahead', line: 1 }])
    expect(mustRead(one(put(LINE_1, 21, '335.75000000'))).warnings).toEqual([])
  })

  it('stops at the stated number of sets', () => {
    const many = Array.from({ length: 4 }, (_, i) => `${put(LINE_1, 3, `9000${i}`)}\n${put(LINE_2, 3, `9000${i}`)}`).join('\n')
    expect(mustRead(readText(many, 4)).sets).toHaveLength(4)
    expect(mustRefuse(readText(many, 3))).toMatchObject({ errors: [{ code: 'too-many-sets', line: 7 }] })
  })

  it('has the epoch that an independent library finds in the OMM of the same set', () => {
    // Source: satellite.js 7.1.0, which keeps the epoch of an OMM to the millisecond (1.2e-8 of a day).
    const satrec = json2satrec(JSON.parse(omm()))
    expect(Math.abs(onlySet(one(LINE_1)).elements.epochUtcUs / 86400e6 + 2440587.5 - satrec.jdsatepoch)).toBeLessThan(2e-8)
  })

  it('recognises a set whatever its name, line ends and checksum state', () => {
    expect(onlySet(readText(`A NAME\r${LINE_1.slice(0, 68)}\r${LINE_2}`)).contentKey).toBe(onlySet(one(LINE_1)).contentKey)
    expect(onlySet(one(put(LINE_1, 54, ' 31235-3'))).contentKey).not.toBe(onlySet(one(LINE_1)).contentKey)
  })
})
