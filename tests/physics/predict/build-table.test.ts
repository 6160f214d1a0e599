import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { buildTable, residualOfRows } from '../../../shared/physics/predict/build-table'
import type { BudgetModel, LinkModel, RadioModel } from '../../../shared/physics/types'
import { propagatorOf } from '../../support/reference-data'
import { dayOf, highest, smallBudget, steppedRadio, tableOf, uhfLink } from '../../support/tables'

const sunSynchronous = dayOf('SSO500', 'S42')
const low = dayOf('VLEO250', 'HI25')
const eccentric = dayOf('MOLNIYA', 'N78')
const overhead = {
  ...sunSynchronous, link: uhfLink, linkMinElevationRad: 0, radio: steppedRadio, budget: smallBudget, pass: highest(sunSynchronous.passes),
}

describe('the tuning table of a high pass', () => {
  it('at 437.5 MHz and 9600 symbols a second holds with one row for every 2.3 kHz or so of Doppler', () => {
    const table = tableOf(overhead)
    const swing = table.check.retunes[0]!.dopplerHz - table.check.retunes.at(-1)!.dopplerHz
    expect(table.kappa).toBe(0.8)
    expect(table.check).toMatchObject({ verdict: 'holds', faults: [], excess: [] })
    expect(table.rows.length).toBeGreaterThan(swing / 2800)
    expect(table.rows.length).toBeLessThan(2 + swing / 2000)
  })

  it('at 8.2 GHz and a symbol rate as low holds with a row for every few seconds', () => {
    const table = tableOf({ ...overhead, link: { ...uhfLink, carrierHz: 8.2e9, symbolRateHz: 38_400 }, radio: { ...steppedRadio, stepHz: 1 }, budget: { ...smallBudget, spacecraftPpm: 0.01 } })
    expect(table.check).toMatchObject({ verdict: 'holds', faults: [] })
    expect(table.rows.length).toBeGreaterThan(25)
  })

  it('falls on the downlink and rises on the uplink', () => {
    const frequencies = (direction: 'downlink' | 'uplink') => tableOf({ ...overhead, link: { ...uhfLink, direction } }).rows.map(row => row.frequencyHz)
    const down = frequencies('downlink')
    const up = frequencies('uplink')
    expect(down).toEqual([...down].sort((a, b) => b - a))
    expect(up).toEqual([...up].sort((a, b) => a - b))
    expect(down[0]).toBeGreaterThan(437.505e6)
    expect(up[0]).toBeLessThan(437.495e6)
  })

  it('commands each row one latency before it takes effect, the first by the start of the workable part', () => {
    const table = tableOf({ ...overhead, radio: { ...steppedRadio, latencyMs: 333.5 } })
    expect(table.check.faults).toEqual([])
    for (const row of table.rows) expect(Number.isInteger(row.atMs)).toBe(true)
    const startsMs = table.parts[0]!.fromMs - (table.rows[0]!.atMs + 333.5)
    expect(startsMs).toBeGreaterThanOrEqual(0)
    expect(startsMs).toBeLessThanOrEqual(1)
  })

  it('breaks, with the rows that come closest and the spans beyond, where the elements are too uncertain', () => {
    const table = tableOf({ ...overhead, budget: { ...smallBudget, alongTrackSigmaS: () => 12 } })
    expect(table.kappa).toBeNull()
    expect(table.check.verdict).toBe('breaks')
    expect(table.rows.length).toBeGreaterThan(1)
    expect(table.check.excess.length).toBeGreaterThan(0)
    expect(table.check.budget.orbitHz).toBeGreaterThan(500)
  })

  it('keeps uplink rows in the licensed band, and breaks where the curve needs more', () => {
    const link: LinkModel = { ...uhfLink, direction: 'uplink', bandLowHz: 437.495e6, bandHighHz: 437.505e6 }
    const table = tableOf({ ...overhead, link })
    expect(table.check.faults).toEqual([])
    expect(table.check.verdict).toBe('breaks')
  })
})

describe('the link\'s own minimum elevation', () => {
  it('narrows the workable part', () => {
    const whole = tableOf(overhead).parts[0]!
    const narrowed = tableOf({ ...overhead, linkMinElevationRad: 0.3 }).parts[0]!
    expect(narrowed.fromMs).toBeGreaterThan(whole.fromMs)
    expect(narrowed.toMs).toBeLessThan(whole.toMs)
  })

  it('above the culmination leaves nothing workable', () => {
    const query = { ...overhead, linkMinElevationRad: Math.PI / 2 }
    expect(buildTable(query)).toEqual({ kind: 'not-workable' })
    expect(residualOfRows({ ...query, rows: [] })).toEqual({ kind: 'not-workable' })
  })
})

describe('rows already published', () => {
  it('check as they did while nothing changes', () => {
    const table = tableOf(overhead)
    expect(residualOfRows({ ...overhead, rows: table.rows })).toEqual(table.check)
  })

  it('lose margin against elements by which the spacecraft comes later', () => {
    const table = tableOf(overhead)
    const { elements } = sunSynchronous.propagator
    const later = propagatorOf({ ...elements, meanAnomalyDeg: (elements.meanAnomalyDeg + 360 - 0.1) % 360 })
    const again = residualOfRows({ ...overhead, propagator: later, rows: table.rows })
    expect('margin' in again && again.margin).toBeLessThan(table.check.margin)
  })
})

describe('whatever the pass, link, radio and budget', () => {
  const days = [sunSynchronous, low, eccentric]
  const queries = fc.record({
    day: fc.integer({ min: 0, max: 2 }), pass: fc.nat(),
    direction: fc.constantFrom('downlink' as const, 'uplink' as const),
    carrierHz: fc.constantFrom(145.9e6, 437.5e6, 2.245e9, 8.2e9),
    epsilonHz: fc.double({ min: 0.02, max: 1, noNaN: true }),
    detector: fc.constantFrom('quadrature' as const, 'coherent' as const), rolloff: fc.constantFrom(null, null, 0.35),
    loss: fc.constantFrom(0.2, 0.5, 1),
    stepHz: fc.constantFrom(1, 10, 12.5, 100), offsetHz: fc.constantFrom(0, 5), dwell: fc.constantFrom(0, 0.5, 1, 8),
    latencyMs: fc.constantFrom(0, 50, 120.7), jump: fc.constantFrom(null, null, null, 1), uncertainty: fc.constantFrom(0, 0, 1, 4),
  }).map((q) => {
    const day = days[q.day]!
    // Symbol rates from a fiftieth of the largest shift to all of it.
    const symbolRateHz = q.epsilonHz * q.carrierHz * 2.4e-5 * 4
    const link: LinkModel = {
      ...uhfLink, direction: q.direction, carrierHz: q.carrierHz, symbolRateHz, detector: q.detector,
      rolloff: q.detector === 'quadrature' ? q.rolloff : null, permittedLossDb: q.loss,
      jumpLimitHz: q.jump === null ? null : Math.max(2 * q.stepHz, symbolRateHz / 10),
    }
    const radio: RadioModel = { stepHz: q.stepHz, offsetHz: q.offsetHz, minDwellS: q.dwell, latencyMs: q.latencyMs, latencyUncertaintyMs: q.uncertainty }
    const budget: BudgetModel = {
      clockErrorMs: 2 * q.uncertainty, ut1MinusUtcS: 0.1 * q.uncertainty, ut1BoundS: 0.02 * q.uncertainty, alongTrackSigmaS: () => 0.02 * q.uncertainty,
      spacecraftPpm: 0.02 * q.uncertainty, stationPpm: 0.01 * q.uncertainty, k: 2,
    }
    return { ...day, link, radio, budget, linkMinElevationRad: 0, pass: day.passes[q.pass % day.passes.length]! }
  })

  it('a plan within four fifths of the allowance is found to hold, one within it to be tight at worst, and neither has a fault', () => {
    const found = { 0.8: 0, 1: 0, none: 0 }
    fc.assert(fc.property(queries, (query) => {
      const table = tableOf(query)
      expect(table.check.faults).toEqual([])
      if (table.kappa === 0.8) expect(table.check.margin).toBeGreaterThanOrEqual(1.25)
      if (table.kappa === 1) expect(table.check.margin).toBeGreaterThanOrEqual(1)
      found[table.kappa ?? 'none']++
    }), { numRuns: 120, seed: 437 })
    expect(found[0.8]).toBeGreaterThan(50)
    expect(found[1] + found.none).toBeGreaterThan(5)
  })
})
