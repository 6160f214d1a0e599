import { describe, expect, it } from 'vitest'
import { checkTable } from '../../../shared/physics/plan/check-table'
import { createNeededFrequency } from '../../../shared/physics/doppler/needed'
import { allowanceOf } from '../../../shared/physics/link/allowance'
import type { TableQuery } from '../../../shared/physics/predict/build-table'
import type { BudgetModel, RadioModel, RetuneRow } from '../../../shared/physics/types'
import { leastLines } from '../plan/least-lines'
import { dayOf, highest, smallBudget, steppedRadio, tableOf, uhfLink } from '../../support/tables'

const day = dayOf('SSO500', 'S42')
const pass = highest(day.passes)
const certain: BudgetModel = { clockErrorMs: 0, ut1MinusUtcS: 0, ut1BoundS: 0, alongTrackSigmaS: () => 0, spacecraftPpm: 0, stationPpm: 0, k: 2 }
const ramping: RadioModel = { ...steppedRadio, ramp: { slopeStepHzPerS: 0.5, maxSlopeHzPerS: 1000 } }
const query = (changes: Partial<TableQuery> = {}): TableQuery => ({ ...day, link: uhfLink, linkMinElevationRad: 0, radio: ramping, budget: smallBudget, pass, ...changes })

describe('the table of a radio that ramps', () => {
  const table = tableOf(query())
  const check = (rows: readonly RetuneRow[], changes: Partial<TableQuery> = {}) => checkTable({ ...query(changes), parts: table.parts, rows })
  const codes = (rows: readonly RetuneRow[], changes: Partial<TableQuery> = {}) => [...new Set(check(rows, changes).faults.map(fault => fault.code))]

  it('holds with fewer rows than constants need, each sloping as the curve does', () => {
    expect(table.check).toMatchObject({ verdict: 'holds', faults: [], excess: [] })
    expect(table.rows.length).toBeLessThan(tableOf(query({ radio: steppedRadio })).rows.length / 1.5)
    for (const row of table.rows) expect(row.slopeHzPerS).toBeLessThan(0)
    for (const row of tableOf(query({ link: { ...uhfLink, direction: 'uplink' } })).rows) expect(row.slopeHzPerS).toBeGreaterThan(0)
  })

  it.each([
    ['437.5 MHz, 9600 symbols/s', 437.5e6, 9600, 10, 0.5], ['437.5 MHz, 1200 symbols/s', 437.5e6, 1200, 1, 0.1], ['437.5 MHz, 300 symbols/s', 437.5e6, 300, 1, 1],
    ['2.245 GHz, 9600 symbols/s', 2.245e9, 9600, 100, 5], ['8.2 GHz, 38 400 symbols/s', 8.2e9, 38_400, 50, 20],
  ])('at %s needs no fewer rows than lines off any grid in h, no more than in h − q/2 − σℓ/4', (_, carrierHz, symbolRateHz, stepHz, slopeStepHzPerS) => {
    const link = { ...uhfLink, carrierHz, symbolRateHz }
    const radio: RadioModel = { ...ramping, stepHz, ramp: { slopeStepHzPerS, maxSlopeHzPerS: 5000 } }
    for (const one of [pass, ...day.passes.slice(0, 2)]) {
      const built = tableOf(query({ link, radio, pass: one, budget: certain }))
      expect(built).toMatchObject({ kappa: 0.8, check: { verdict: 'holds', faults: [] } })
      const needed = createNeededFrequency({ stateAt: day.ephemeris.stateAt, site: day.site, ut1MinusUtcS: 0, direction: 'downlink', carrierHz })
      const h = 0.8 * allowanceOf(link).allowanceHz
      const part = built.parts[0]!
      const longestS = Math.max(...built.rows.map((row, i) => (built.rows[i + 1]?.atMs ?? part.toMs) - row.atMs)) / 1000
      expect(built.parts).toHaveLength(1)
      expect(built.rows.length).toBeGreaterThanOrEqual(leastLines(needed.dopplerHz, part, h))
      expect(built.rows.length).toBeLessThanOrEqual(leastLines(needed.dopplerHz, part, h - stepHz / 2 - slopeStepHzPerS * longestS / 4))
    }
  })

  it('keeps within what the loop follows, where constants cannot, and the checker knows it', () => {
    // The peak rate at 437 MHz and 500 km is 159.3 Hz/s (mechanics).
    const link = { ...uhfLink, driftLimitHzPerS: 20 }
    expect(tableOf(query({ link, radio: steppedRadio })).check.faults.map(fault => fault.code)).toEqual(['drift'])
    const bound = tableOf(query({ link }))
    expect(bound.check).toMatchObject({ verdict: 'holds', faults: [] })
    // Rates from nearly 0 to the peak and back, 40 Hz/s a row.
    expect(bound.rows.length).toBeGreaterThanOrEqual(2 * Math.floor(Math.max(...bound.rows.map(row => -row.slopeHzPerS)) / 40))
    expect(codes(table.rows, { link })).toEqual(['drift'])
  })

  it('breaks for drift where no slope is steep enough', () => {
    const flat = tableOf(query({ link: { ...uhfLink, driftLimitHzPerS: 20 }, radio: { ...ramping, ramp: { slopeStepHzPerS: 1, maxSlopeHzPerS: 50 } } }))
    expect(flat.check.faults.map(fault => fault.code)).toEqual(['drift'])
    expect(flat.check.verdict).toBe('breaks')
    for (const row of flat.rows) expect(Math.abs(row.slopeHzPerS)).toBeLessThanOrEqual(50)
  })

  it('keeps its jumps, measured from where the ramp before has come to', () => {
    const link = { ...uhfLink, jumpLimitHz: 300 }
    const bound = tableOf(query({ link }))
    expect(bound.check).toMatchObject({ verdict: 'holds', faults: [] })
    bound.rows.slice(1).forEach((row, i) => {
      const before = bound.rows[i]!
      const reached = before.frequencyHz + before.slopeHzPerS * (row.atMs - before.atMs) / 1000
      expect(Math.abs(row.frequencyHz - reached)).toBeLessThanOrEqual(300 + 1e-6)
    })
    expect(codes(table.rows, { link: { ...uhfLink, jumpLimitHz: 5 } })).toEqual(['jump'])
  })

  it.each([[3000, 1], [600, 1], [300, 1], [120, 1], [600, 10]])('with jumps of %d Hz at most on a grid of %d Hz needs no fewer rows than lines in h, no more than in half a jump less what the grids take', (jumpLimitHz, stepHz) => {
    const link = { ...uhfLink, jumpLimitHz }
    const radio: RadioModel = { ...ramping, stepHz, ramp: { slopeStepHzPerS: 0.1, maxSlopeHzPerS: 1000 } }
    for (const one of [pass, ...day.passes.slice(0, 2)]) {
      const built = tableOf(query({ link, radio, pass: one, budget: certain }))
      expect(built).toMatchObject({ kappa: 0.8, check: { verdict: 'holds', faults: [] } })
      const needed = createNeededFrequency({ stateAt: day.ephemeris.stateAt, site: day.site, ut1MinusUtcS: 0, direction: 'downlink', carrierHz: link.carrierHz })
      const h = 0.8 * allowanceOf(link).allowanceHz
      const part = built.parts[0]!
      const longestS = Math.max(...built.rows.map((row, i) => (built.rows[i + 1]?.atMs ?? part.toMs) - row.atMs)) / 1000
      expect(built.rows.length).toBeGreaterThanOrEqual(leastLines(needed.dopplerHz, part, h))
      // Rows within half a jump of the curve are a jump apart at most (mechanics).
      expect(built.rows.length).toBeLessThanOrEqual(leastLines(needed.dopplerHz, part, Math.min(h, jumpLimitHz / 2) - stepHz / 2 - 0.1 * longestS / 4))
    }
  })

  it('stands on the line from the first row on, however early that takes effect', () => {
    const early = tableOf(query({ firstRowLeadMs: 30_000 }))
    expect(early.check).toMatchObject({ verdict: 'holds', faults: [] })
    expect(early.parts[0]!.fromMs - (early.rows[0]!.atMs + 50)).toBeGreaterThanOrEqual(30_000)
    // Moved earlier without its frequency, the row would be off by half a minute of slope.
    const moved = check([{ ...table.rows[0]!, atMs: table.rows[0]!.atMs - 30_000 }, ...table.rows.slice(1)])
    expect(moved.worstResidualHz).toBeGreaterThan(table.check.worstResidualHz + 20 * Math.abs(table.rows[0]!.slopeHzPerS))
  })

  it('keeps uplink ramps in the licensed band, and the checker finds those that leave it', () => {
    const up = { ...uhfLink, direction: 'uplink' as const }
    const free = tableOf(query({ link: up }))
    const narrow = { ...up, bandLowHz: 437.4905e6, bandHighHz: 437.5095e6 }
    const ends = checkTable({ ...query({ link: narrow }), parts: free.parts, rows: free.rows }).faults.map(fault => fault.code)
    expect(new Set(ends)).toEqual(new Set(['band']))
    const bound = tableOf(query({ link: narrow }))
    expect(bound.check.faults).toEqual([])
  })

  it('is caught out by slopes of the wrong sign, left out, off the radio\'s grid or too steep', () => {
    expect(check(table.rows.map(row => ({ ...row, slopeHzPerS: -row.slopeHzPerS }))).verdict).toBe('breaks')
    expect(check(table.rows.map(row => ({ ...row, slopeHzPerS: 0 }))).excess.length).toBeGreaterThan(0)
    expect(codes(table.rows.map((row, i) => i === 1 ? { ...row, slopeHzPerS: row.slopeHzPerS + 0.2 } : row))).toEqual(['slope'])
    expect(codes(table.rows, { radio: { ...ramping, ramp: { slopeStepHzPerS: 0.5, maxSlopeHzPerS: 20 } } })).toEqual(['slope'])
    expect(codes(table.rows, { radio: steppedRadio })).toEqual(['slope'])
  })

  it('is caught out by a clock four seconds off and by two rows swapped', () => {
    const peak = table.rows.reduce((most, row) => Math.min(most, row.slopeHzPerS), 0)
    expect(check(table.rows.map(row => ({ ...row, atMs: row.atMs - 4000 }))).worstResidualHz).toBeGreaterThan(-3 * peak)
    expect(check(table.rows.map(row => ({ ...row, atMs: row.atMs + 4000 }))).verdict).toBe('breaks')
    const [first, second] = table.rows
    const swapped = [{ ...second!, atMs: first!.atMs }, { ...first!, atMs: second!.atMs }, ...table.rows.slice(2)]
    expect(check(swapped).verdict).toBe('breaks')
  })
})
