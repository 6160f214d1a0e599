import { describe, expect, it } from 'vitest'
import { checkTable } from '../../../shared/physics/plan/check-table'
import type { TableQuery } from '../../../shared/physics/predict/build-table'
import { residualOfRows } from '../../../shared/physics/predict/build-table'
import type { ConverterModel, LinkModel, RadioModel, RetuneRow } from '../../../shared/physics/types'
import { propagatorOf } from '../../support/reference-data'
import { dayOf, highest, smallBudget, steppedRadio, tableOf, uhfLink } from '../../support/tables'

const day = dayOf('SSO500', 'S42')
const pass = highest(day.passes)
const link: LinkModel = { ...uhfLink, carrierHz: 2_245e6, symbolRateHz: 38_400 }
/** A receiver at 437 and 400 MHz behind a converter: from below, and from above with the spectrum inverted. */
const below: ConverterModel = { loHz: 1_808_000_007, inverts: false }
const above: ConverterModel = { loHz: 2_645_000_007, inverts: true }
const radio = (converter: ConverterModel | null, ramps = false): RadioModel =>
  ({ ...steppedRadio, stepHz: 100, offsetHz: 25, converter, ramp: ramps ? { slopeStepHzPerS: 2, maxSlopeHzPerS: 5000 } : null })
const query = (radio: RadioModel, changes: Partial<TableQuery> = {}): TableQuery => ({ ...day, link, linkMinElevationRad: 0, radio, budget: smallBudget, pass, ...changes })

describe.each([['stepping', false], ['ramping', true]] as const)('a %s radio behind a converter', (_, ramps) => {
  const sky = tableOf(query(radio(null, ramps)))
  const low = tableOf(query(radio(below, ramps)))
  const high = tableOf(query(radio(above, ramps)))
  const check = (table: typeof low, rows: readonly RetuneRow[], through: RadioModel, changes: Partial<TableQuery> = {}) =>
    checkTable({ ...query(through, changes), parts: table.parts, rows })

  it('has rows for its dial, |sky − oscillator|, on the dial\'s grid, and holds', () => {
    for (const [table, dialHz] of [[low, 2_245e6 - 1_808_000_007], [high, 2_645_000_007 - 2_245e6]] as const) {
      expect(table.check).toMatchObject({ verdict: 'holds', faults: [] })
      for (const row of table.rows) {
        expect((row.frequencyHz - 25) % 100).toBe(0)
        expect(Math.abs(row.frequencyHz - dialHz)).toBeLessThan(60_000)
      }
    }
    expect(sky.check.verdict).toBe('holds')
  })

  it('falls on its dial through a downlink\'s pass, and rises where the spectrum is inverted, slopes too', () => {
    const rises = (rows: readonly RetuneRow[]) => rows.at(-1)!.frequencyHz - rows[0]!.frequencyHz
    expect(rises(low.rows)).toBeLessThan(-60_000)
    expect(rises(high.rows)).toBeGreaterThan(60_000)
    if (!ramps) return
    for (const row of low.rows) expect(row.slopeHzPerS).toBeLessThan(0)
    for (const row of high.rows) expect(row.slopeHzPerS).toBeGreaterThan(0)
  })

  it('is caught out when the converter is forgotten, or put where there is none', () => {
    const forgotten = check(low, sky.rows, radio(below, ramps))
    expect(forgotten.verdict).toBe('breaks')
    expect(forgotten.worstResidualHz).toBeGreaterThan(1.8e9)
    expect(check(sky, low.rows, radio(null, ramps)).verdict).toBe('breaks')
  })

  it('is caught out when the inversion is forgotten: rows, or their slopes alone', () => {
    // Mirrored about the carrier's dial: as if the oscillator were below.
    const centre = above.loHz - link.carrierHz
    const mirrored = check(high, high.rows.map(row => ({ ...row, frequencyHz: 2 * centre - row.frequencyHz, slopeHzPerS: -row.slopeHzPerS })), radio(above, ramps))
    expect(mirrored.verdict).toBe('breaks')
    expect(mirrored.worstResidualHz).toBeGreaterThan(90_000)
    if (ramps) expect(check(high, high.rows.map(row => ({ ...row, slopeHzPerS: -row.slopeHzPerS })), radio(above, ramps)).verdict).toBe('breaks')
  })

  it('is caught out by rows rounded to the sky\'s grid, a shifted clock, swapped rows and a stale set', () => {
    const rounded = low.rows.map(row => ({ ...row, frequencyHz: Math.round((row.frequencyHz + below.loHz) / 100) * 100 - below.loHz }))
    expect(new Set(check(low, rounded, radio(below, ramps)).faults.map(fault => fault.code))).toEqual(new Set(['off-grid']))
    expect(check(high, high.rows.map(row => ({ ...row, atMs: row.atMs + 4000 })), radio(above, ramps)).verdict).toBe('breaks')
    const [first, second] = high.rows
    expect(check(high, [{ ...second!, atMs: first!.atMs }, { ...first!, atMs: second!.atMs }, ...high.rows.slice(2)], radio(above, ramps)).verdict).toBe('breaks')
    const { elements } = day.propagator
    const ahead = propagatorOf({ ...elements, meanAnomalyDeg: (elements.meanAnomalyDeg + 360 * elements.meanMotionRevPerDay / 86_400 * 8) % 360 })
    const stale = residualOfRows({ ...query(radio(above, ramps)), propagator: ahead, rows: high.rows })
    expect('verdict' in stale && stale.verdict).toBe('breaks')
  })

  it('keeps within what the loop follows where it ramps, whichever way its dial turns', () => {
    for (const converter of ramps ? [below, above] : []) expect(tableOf(query(radio(converter, true), { link: { ...link, driftLimitHzPerS: 100 } })).check).toMatchObject({ verdict: 'holds', faults: [] })
    // 802 Hz/s at most at 2200 MHz and 500 km (mechanics), which no constant follows.
    if (!ramps) expect(tableOf(query(radio(above), { link: { ...link, driftLimitHzPerS: 100 } })).check.faults.map(fault => fault.code)).toEqual(['drift'])
  })

  it('keeps what it radiates in the licensed band, whichever way its dial turns', () => {
    const up: LinkModel = { ...link, direction: 'uplink', bandLowHz: 2_245e6 - 40_000, bandHighHz: 2_245e6 + 60_000 }
    for (const converter of [below, above]) {
      const table = tableOf(query(radio(converter, ramps), { link: up }))
      expect(table.check.faults).toEqual([])
      expect(table.check.verdict).toBe('breaks')
      // Only the lower edge binds, 40 kHz below the carrier: what is needed at 5° of elevation is some 50 kHz below; the budget adds up to 4 kHz.
      expect(table.check.worstResidualHz).toBeGreaterThan(8000)
      expect(table.check.worstResidualHz).toBeLessThan(14_500)
      const free = tableOf(query(radio(converter, ramps), { link: { ...up, bandLowHz: null, bandHighHz: null } }))
      expect(new Set(check(table, free.rows, radio(converter, ramps), { link: up }).faults.map(fault => fault.code))).toEqual(new Set(['band']))
    }
  })
})
