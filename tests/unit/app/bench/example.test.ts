import { twoline2satrec } from 'satellite.js'
import { describe, expect, it } from 'vitest'
import { readElements } from '#shared/formats/elements/read-elements'
import { problemsOf } from '~/utils/bench/body'
import { exampleElements, exampleQuestion } from '~/utils/bench/example'

describe('the example orbit', () => {
  it.each(['2026-11-30T18:00:00.000Z', '2027-01-01T00:00:00.000Z', '2028-12-31T23:59:00.000Z'])('reads in an independent program as a low, nearly polar orbit with its epoch at %s', (at) => {
    const [, line1 = '', line2 = ''] = exampleElements(Date.parse(at)).split('\n')
    expect([line1.length, line2.length]).toEqual([69, 69])
    const set = twoline2satrec(line1, line2)
    // 2 440 587.5 is the Julian date of 1970-01-01T00:00:00Z (common practice).
    expect(Math.abs((set.jdsatepoch - 2_440_587.5) * 86_400_000 - Date.parse(at))).toBeLessThan(50)
    expect(set.inclo * 180 / Math.PI).toBeCloseTo(97.6, 9)
    // Kepler: a = (µ/n²)^⅓, WGS-72; 550 km over a 6378 km Earth.
    const meanMotionRadPerS = 15.05 * 2 * Math.PI / 86_400
    expect(Math.cbrt(398_600.8 / meanMotionRadPerS ** 2) - 6378).toBeCloseTo(550, -1)
    expect(set.error).toBe(0)
  })

  it('bears the checksums that a strict reader asks for: digits plus one a minus, modulo 10', () => {
    // Worked by hand from the columns as published, for 2026 day 334.75.
    const [, line1 = '', line2 = ''] = exampleElements(Date.parse('2026-11-30T18:00:00.000Z')).split('\n')
    expect(line1).toMatch(/^1 99990U {10}26334\.75000000 /)
    // 1+36+8+10+12 (number, year, day, fraction) + 2 + 1 + 1+1+3 + 27 (rates, B*, set number).
    expect(Number(line1.at(-1))).toBe((1 + 36 + 8 + 10 + 12 + 2 + 1 + 1 + 1 + 3 + 27) % 10)
    expect(Number(line2.at(-1))).toBe((2 + 36 + 22 + 3 + 3 + 9 + 9 + 11 + 1) % 10)
    expect(readElements(Buffer.from(exampleElements(Date.parse('2026-11-30T18:00:00.000Z'))), { nowMs: Date.parse('2026-11-30T18:00:00.000Z') })).toMatchObject({ kind: 'read', refusals: [], sets: [{ warnings: [] }] })
  })

  it('makes a question that can be sent as it is', () => {
    expect(problemsOf(exampleQuestion(Date.parse('2026-11-30T18:00:41.000Z')))).toEqual({})
  })
})
