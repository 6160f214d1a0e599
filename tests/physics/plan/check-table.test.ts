import { describe, expect, it } from 'vitest'
import { checkTable } from '../../../shared/physics/plan/check-table'
import type { LinkModel, Propagator, RetuneRow, TableCheck } from '../../../shared/physics/types'
import { propagatorOf, referenceDoppler } from '../../support/reference-data'
import { elementsFromLines, siteFromDegrees } from '../../support/reference-elements'
import { dayOf, highest, smallBudget, steppedRadio, tableOf, uhfLink } from '../../support/tables'

const noUncertainty = { ...smallBudget, clockErrorMs: 0, ut1BoundS: 0, alongTrackSigmaS: () => 0, spacecraftPpm: 0, stationPpm: 0 }

describe('a table of one row on the carrier', () => {
  // Residuals are then the Doppler itself, known from Skyfield and python-sgp4 (data/README.md).
  const pass = referenceDoppler().passes[0]!
  const fromMs = Date.parse(pass.windowStart) + pass.startS * 1000
  const toMs = fromMs + (pass.rangeRateMps.length - 1) * pass.stepS * 1000
  const check = (direction: 'downlink' | 'uplink', untilMs = toMs) => checkTable({
    propagator: propagatorOf(elementsFromLines(pass.line1, pass.line2)), site: siteFromDegrees(pass.station),
    link: { ...uhfLink, direction }, radio: { ...steppedRadio, latencyUncertaintyMs: 0 }, budget: noUncertainty, parts: [{ fromMs, toMs: untilMs }],
    rows: [{ atMs: fromMs - 50, frequencyHz: 437_500_000, slopeHzPerS: 0 }],
  })

  it.each(['downlink', 'uplink'] as const)('has the whole %s Doppler of the independent programs as its residual, signs included', (direction) => {
    const offsets = (direction === 'downlink' ? pass.receivedMinusCarrierHz : pass.transmitMinusCarrierHz)['437500000.0']!
    const { retunes, worstResidualHz, budget, verdict } = check(direction)
    // The extremes lie at the pass's ends, which are samples.
    expect(Math.abs(retunes[0]!.residualMinHz - Math.min(...offsets))).toBeLessThan(0.05)
    expect(Math.abs(retunes[0]!.residualMaxHz - Math.max(...offsets))).toBeLessThan(0.05)
    expect(Math.abs(worstResidualHz - Math.max(...offsets.map(Math.abs)))).toBeLessThan(0.05)
    expect(Math.abs(budget.stepsHz)).toBe(worstResidualHz)
    expect(Math.abs(retunes[0]!.dopplerHz - offsets[0]!)).toBeLessThan(0.05)
    expect(Math.abs(retunes[0]!.rangeRateMps - pass.rangeRateMps[0]!)).toBeLessThan(0.01)
    expect(verdict).toBe('breaks')
  })

  it('is beyond the allowance but for the seconds around the turn, and says where', () => {
    const { excess, allowance } = check('downlink')
    const offsets = pass.receivedMinusCarrierHz['437500000.0']!
    expect(excess).toHaveLength(2)
    expect(excess[0]!.fromMs).toBe(fromMs)
    expect(excess[1]!.toMs).toBe(toMs)
    const within = (i: number) => excess.every(span => fromMs + i * 10_000 < span.fromMs || fromMs + i * 10_000 > span.toMs)
    offsets.forEach((offset, i) => expect(within(i)).toBe(Math.abs(offset) <= allowance.allowanceHz))
  })

  it('scales the symbol clock by the Doppler over the carrier', () => {
    const offsets = pass.receivedMinusCarrierHz['437500000.0']!
    const [slowest, fastest] = check('downlink').symbolClockPpm
    expect(slowest).toBeCloseTo(Math.min(...offsets) / 437.5, 3)
    expect(fastest).toBeCloseTo(Math.max(...offsets) / 437.5, 3)
    // The uplink arrives scaled the same way, though it is transmitted the other way about; both while approaching, and to
    // the difference between the two directions, v²/c².
    const approaching = (direction: 'downlink' | 'uplink') => check(direction, fromMs + 60_000).symbolClockPpm
    expect(approaching('uplink')[0]).toBeCloseTo(approaching('downlink')[0], 1)
    expect(approaching('uplink')[1]).toBeCloseTo(offsets[0]! / 437.5, 1)
  })

  it('is on its radio and within no reach of the link', () => {
    expect(check('downlink').faults).toEqual([])
    // 10 414 Hz is past the first null at 9600 Hz: sinc of 1.085 is 12.3 dB·2 down.
    expect(check('downlink').retunes[0]!.lossDb).toBeGreaterThan(20)
  })
})

describe('the checker catches what goes wrong with a good table', () => {
  const day = dayOf('SSO500', 'S42')
  const pass = highest(day.passes)
  const link: LinkModel = { ...uhfLink, direction: 'uplink', bandLowHz: 437.48e6, bandHighHz: 437.52e6 }
  const setting = { ...day, site: day.site, link, linkMinElevationRad: 0, radio: steppedRadio, budget: smallBudget, pass }
  const table = tableOf(setting)
  const check = (rows: readonly RetuneRow[], changes: Partial<{ link: LinkModel, propagator: Propagator }> = {}): TableCheck =>
    checkTable({ ...setting, parts: table.parts, rows, ...changes })
  const codes = (result: TableCheck) => [...new Set(result.faults.map(fault => fault.code))]

  it('which, as planned, holds without a fault', () => {
    expect(check(table.rows)).toMatchObject({ verdict: 'holds', faults: [], excess: [] })
    expect(table.rows.length).toBeGreaterThan(4)
  })

  it('an uplink with the sign of a downlink leaves about twice the shift', () => {
    const mirrored = check(table.rows.map(row => ({ ...row, frequencyHz: 2 * link.carrierHz - row.frequencyHz })))
    const shift = Math.max(...table.rows.map(row => Math.abs(row.frequencyHz - link.carrierHz)))
    expect(mirrored.verdict).toBe('breaks')
    expect(mirrored.worstResidualHz).toBeGreaterThan(2 * shift)
  })

  it('a clock four seconds off', () => {
    expect(check(table.rows.map(row => ({ ...row, atMs: row.atMs - 4000 }))).verdict).not.toBe('holds')
    const late = check(table.rows.map(row => ({ ...row, atMs: row.atMs + 4000 })))
    expect(late.verdict).toBe('breaks')
    expect(codes(late)).toEqual(['late'])
  })

  it('rows commanded at the instant of effect, as if the radio were immediate: late by its latency', () => {
    const late = check(table.rows.map(row => ({ ...row, atMs: row.atMs + steppedRadio.latencyMs })))
    expect(codes(late)).toEqual(['late'])
    expect(late.faults[0]!.message).toMatch(/earlier/)
  })

  it('two rows swapped', () => {
    const rows = [...table.rows]
    ;[rows[2], rows[3]] = [{ ...rows[2]!, frequencyHz: rows[3]!.frequencyHz }, { ...rows[3]!, frequencyHz: rows[2]!.frequencyHz }]
    const swapped = check(rows)
    expect(swapped.verdict).toBe('breaks')
    expect(swapped.faults).toEqual([])
    expect(swapped.excess.length).toBeGreaterThan(0)
    ;[rows[2], rows[3]] = [table.rows[3]!, table.rows[2]!]
    expect(codes(check(rows))).toEqual(['order'])
  })

  it('a row left out', () => {
    const gap = check(table.rows.filter((_, i) => i !== 3))
    expect(gap.verdict).toBe('breaks')
    expect(gap.excess.length).toBeGreaterThan(0)
  })

  it('stale elements: a spacecraft eight seconds ahead of them', () => {
    const elements = day.propagator.elements
    const turnDeg = 360 * elements.meanMotionRevPerDay / 86_400 * 8
    const ahead = propagatorOf({ ...elements, meanAnomalyDeg: (elements.meanAnomalyDeg + turnDeg) % 360 })
    expect(check(table.rows, { propagator: ahead }).margin).toBeLessThan(check(table.rows).margin / 1.5)
    expect(check(table.rows, { propagator: ahead }).verdict).toBe('breaks')
  })

  it('rounding off the grid', () => {
    const rounded = check(table.rows.map((row, i) => i === 1 ? { ...row, frequencyHz: row.frequencyHz + 4 } : row))
    expect(codes(rounded)).toEqual(['off-grid'])
    expect(rounded.verdict).toBe('breaks')
    expect(rounded.faults[0]!.message).toContain(String(table.rows[1]!.frequencyHz))
  })

  it('rows closer than the dwell', () => {
    const hurried = [...table.rows, { ...table.rows.at(-1)!, atMs: table.rows.at(-1)!.atMs + 999 }]
    expect(codes(check(hurried))).toEqual(['dwell'])
  })

  it('rows outside the licensed band, on an uplink only', () => {
    const narrow = { bandLowHz: 437.495e6, bandHighHz: 437.505e6 }
    expect(codes(check(table.rows, { link: { ...link, ...narrow } }))).toEqual(['band'])
    const down = tableOf({ ...setting, link: { ...link, ...narrow, direction: 'downlink' } })
    expect(down.check.faults).toEqual([])
  })

  it('a jump or a drift that the link\'s loop does not follow', () => {
    expect(codes(check(table.rows, { link: { ...link, jumpLimitHz: 1000 } }))).toEqual(['jump'])
    const drift = check(table.rows, { link: { ...link, driftLimitHzPerS: 50 } })
    expect(codes(drift)).toEqual(['drift'])
    expect(drift.verdict).toBe('breaks')
    const both = check(table.rows, { link: { ...link, jumpLimitHz: 1000, driftLimitHzPerS: 50 } }).faults.map(fault => fault.atMs)
    expect(both).toEqual([...both].sort((a, b) => a - b))
  })

  it('a slope that this radio cannot follow', () => {
    expect(codes(check(table.rows.map((row, i) => i === 2 ? { ...row, slopeHzPerS: 5 } : row)))).toEqual(['slope'])
  })

  it('no rows at all', () => {
    const empty = check([])
    expect(codes(empty)).toEqual(['late'])
    expect(empty).toMatchObject({ verdict: 'breaks', retunes: [] })
    expect(empty.worstResidualHz).toBeGreaterThan(9000)
  })

  it('and refuses a table without a workable part', () => {
    expect(() => checkTable({ ...setting, parts: [], rows: table.rows })).toThrow(/workable/)
  })
})

describe('the verdict', () => {
  const day = dayOf('SSO500', 'S42')
  const pass = highest(day.passes)
  const setting = { ...day, link: uhfLink, linkMinElevationRad: 0, radio: steppedRadio, budget: noUncertainty, pass }
  const { parts, rows, check } = tableOf(setting)
  // The same rows against a stated limit that makes the margin what it should be.
  const against = (margin: number) => checkTable({ ...setting, parts, rows, link: { ...uhfLink, detector: 'stated', limitHz: margin * check.worstResidualHz } })

  it('is holds from a margin of 1.25, tight from 1, breaks below', () => {
    expect(against(1.2501).verdict).toBe('holds')
    expect(against(1.2499).verdict).toBe('tight')
    expect(against(1.0001).verdict).toBe('tight')
    expect(against(0.9999).verdict).toBe('breaks')
    expect(against(1.2499).excess).toEqual([])
    expect(against(0.9999).excess.length).toBeGreaterThan(0)
    expect(against(1.1).margin).toBeCloseTo(1.1, 9)
  })

  it('counts timing and UT1 in full and the spreads k times, as the parts at the worst instant show', () => {
    const { budget: parts0, worstResidualHz } = checkTable({ ...setting, parts, rows, budget: { ...smallBudget, k: 3 } })
    const spread = Math.hypot(parts0.orbitHz, parts0.oscillatorHz)
    expect(worstResidualHz).toBeCloseTo(Math.abs(parts0.stepsHz) + parts0.timingHz + parts0.ut1Hz + 3 * spread, 9)
    // 437.5 MHz · √(0.5² + 0.05²) ppm / √3, by hand.
    expect(parts0.oscillatorHz).toBeCloseTo(126.925, 2)
  })

  it('states no loss where the detector has no curve', () => {
    expect(against(1.1).retunes.every(row => row.lossDb === null)).toBe(true)
    for (const row of check.retunes) expect(row.lossDb).toBeLessThan(0.5)
  })
})
