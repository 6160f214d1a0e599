import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { RetunePlan, RetuneProblem } from '../../../shared/physics/plan/plan-retunes'
import { planRetunes } from '../../../shared/physics/plan/plan-retunes'
import type { RadioModel, Span } from '../../../shared/physics/types'

const START = Date.UTC(2026, 10, 30, 12)
const radio: RadioModel = { stepHz: 10, offsetHz: 0, minDwellS: 1, latencyMs: 50, latencyUncertaintyMs: 0 }

/** The S of a pass: Doppler of uniform straight motion, −F·x/√(1+x²) with x in units of closest range over speed. */
const curve = (carrierHz: number, swingHz: number, culminationMs: number, scaleS: number) => (utcMs: number) => {
  const x = (utcMs - culminationMs) / 1000 / scaleS
  return carrierHz - swingHz * x / Math.sqrt(1 + x * x)
}

const overhead: RetuneProblem = {
  needed: { frequencyHz: curve(437.5e6, 10_000, START + 300_000, 65) }, uncertaintyHz: () => 100, allowanceHz: 1785.5,
  parts: [{ fromMs: START, toMs: START + 600_000 }], radio, jumpLimitHz: null, bandLowHz: null, bandHighHz: null,
}
const flat = (frequencyHz: number, changes: Partial<RetuneProblem> = {}): RetuneProblem =>
  ({ ...overhead, needed: { frequencyHz: () => frequencyHz }, uncertaintyHz: () => 0, ...changes })

/** Largest |needed − set| + uncertainty at 20 ms and both sides of every retune, straight from the problem. */
function worstOf(problem: RetuneProblem, plan: RetunePlan): number {
  let worst = 0
  plan.rows.forEach((row, i) => {
    const end = plan.rows[i + 1]?.effectMs ?? Infinity
    for (const part of problem.parts) {
      const from = Math.max(part.fromMs, row.effectMs)
      const to = Math.min(part.toMs, end)
      for (let at = from; at <= to; at = at < to && at + 20 > to ? to : at + 20) {
        worst = Math.max(worst, Math.abs(problem.needed.frequencyHz(at) - row.frequencyHz) + problem.uncertaintyHz(at))
      }
    }
  })
  return worst
}

describe('planning the retunes of an overhead pass', () => {
  const plan = planRetunes(overhead)

  it('keeps to four fifths of the allowance, uncertainty included', () => {
    expect(plan.kappa).toBe(0.8)
    expect(plan.excessHz).toBe(0)
    expect(worstOf(overhead, plan)).toBeLessThanOrEqual(0.8 * 1785.5)
  })

  it('needs as few rows as the swing over twice the half-width allows', () => {
    // 19 555 Hz of swing over twice 1328 Hz is 7.4.
    expect(plan.rows.length).toBe(8)
  })

  it('begins with the workable part, on whole milliseconds, on the grid, one dwell apart', () => {
    expect(plan.rows[0]!.effectMs).toBe(START)
    for (const [i, row] of plan.rows.entries()) {
      expect(row.effectMs % 1).toBe(0)
      expect(row.frequencyHz % 10).toBe(0)
      if (i > 0) expect(row.effectMs - plan.rows[i - 1]!.effectMs).toBeGreaterThanOrEqual(1000)
    }
  })

  it('falls on a downlink from the first row to the last', () => {
    const frequencies = plan.rows.map(row => row.frequencyHz)
    expect([...frequencies].sort((a, b) => b - a)).toEqual(frequencies)
  })
})

describe('for any pass, radio and allowance', () => {
  const problems = fc.record({
    swing: fc.double({ min: 500, max: 200_000, noNaN: true }), scale: fc.double({ min: 25, max: 120, noNaN: true }),
    allowance: fc.double({ min: 0.01, max: 0.4, noNaN: true }), stepShare: fc.double({ min: 0.001, max: 0.5, noNaN: true }),
    off: fc.double({ min: -0.4, max: 0.4, noNaN: true }), offsetHz: fc.double({ min: 0, max: 1000, noNaN: true }),
  }).map(({ swing, scale, allowance, stepShare, off, offsetHz }): RetuneProblem => ({
    ...overhead, needed: { frequencyHz: curve(2.2e9, swing, START + 300_000 + off * 600_000, scale) }, uncertaintyHz: () => 0,
    allowanceHz: allowance * swing, radio: { ...radio, stepHz: stepShare * allowance * swing, offsetHz, minDwellS: 0 },
  }))

  it('rows number no fewer than swing over twice the half-width, and no more than a half-width less half a step needs', () => {
    fc.assert(fc.property(problems, (problem) => {
      const plan = planRetunes(problem)
      const swing = problem.needed.frequencyHz(START) - problem.needed.frequencyHz(START + 600_000)
      const half = 0.8 * problem.allowanceHz
      // The fall within one millisecond, and the sampling error of 0.025 % of the allowance.
      const lost = 1e-3 * problem.allowanceHz + 0.01 * problem.allowanceHz
      expect(plan.kappa).toBe(0.8)
      expect(plan.rows.length).toBeGreaterThanOrEqual(Math.ceil(swing / (2 * half)))
      expect(plan.rows.length).toBeLessThanOrEqual(Math.ceil(swing / (2 * (half - problem.radio.stepHz / 2 - lost))))
      expect(worstOf(problem, plan)).toBeLessThanOrEqual(half)
    }), { numRuns: 60, seed: 7 })
  })
})

describe('where the grid is too coarse', () => {
  it('uses the whole allowance only when four fifths of it have no plan', () => {
    // Midway between settings 18 Hz apart is 9 Hz off: more than 8, less than 10.
    expect(planRetunes(flat(1009, { allowanceHz: 10, radio: { ...radio, stepHz: 18, offsetHz: 1000 } }))).toMatchObject({ kappa: 1, excessHz: 0 })
    expect(planRetunes(flat(1007, { allowanceHz: 10, radio: { ...radio, stepHz: 18, offsetHz: 1000 } })).kappa).toBe(0.8)
  })

  it('still gives the rows that miss by least, and says by how much', () => {
    // 15 Hz from either setting against 10 Hz.
    const plan = planRetunes(flat(1015, { allowanceHz: 10, radio: { ...radio, stepHz: 30, offsetHz: 1000 } }))
    expect(plan.kappa).toBeNull()
    expect(plan.rows).toHaveLength(1)
    expect(plan.rows[0]!.frequencyHz).toBe(1000)
    expect(plan.excessHz).toBeCloseTo(5, 6)
  })
})

describe('where the uncertainty takes the whole allowance', () => {
  it('gives rows that keep as close as the radio can, and the excess', () => {
    const plan = planRetunes({ ...overhead, uncertaintyHz: () => 2000 })
    expect(plan.kappa).toBeNull()
    expect(plan.excessHz).toBeGreaterThan(2000 - 1785.5)
    // One dwell at culmination, 154 Hz/s, centred leaves 77 Hz, and the grid adds at most 5.
    expect(worstOf({ ...overhead, uncertaintyHz: () => 0 }, plan)).toBeLessThan(77 + 5 + 1)
  })

  it('treats a link without any allowance alike', () => {
    expect(planRetunes({ ...overhead, allowanceHz: 0 }).rows.length).toBeGreaterThan(8)
  })
})

describe('what else bounds the rows', () => {
  it('the band: rows stay inside although the curve leaves it', () => {
    const plan = planRetunes({ ...overhead, bandLowHz: 437_495_003, bandHighHz: 437_504_997 })
    for (const row of plan.rows) {
      expect(row.frequencyHz).toBeGreaterThanOrEqual(437_495_010)
      expect(row.frequencyHz).toBeLessThanOrEqual(437_504_990)
    }
    expect(plan.kappa).toBeNull()
  })

  it('a band without a grid point is passed over', () => {
    expect(planRetunes(flat(1000, { allowanceHz: 50, bandLowHz: 1001, bandHighHz: 1009 })).rows[0]!.frequencyHz).toBe(1000)
  })

  it('the jump limit: more rows, none further than it from the one before', () => {
    const plan = planRetunes({ ...overhead, jumpLimitHz: 500 })
    expect(plan.kappa).toBe(0.8)
    const jumps = plan.rows.slice(1).map((row, i) => Math.abs(row.frequencyHz - plan.rows[i]!.frequencyHz))
    expect(Math.max(...jumps)).toBeLessThanOrEqual(500)
    // From first to last setting the radio has to cross at least the swing less a half-width at either end, 500 Hz at a time.
    expect(plan.rows.length).toBeGreaterThanOrEqual(1 + (19_555 - 2 * 1328) / 500)
    expect(plan.rows.length).toBeLessThanOrEqual(2 + (19_555 - 2 * 1200) / 500)
    expect(worstOf(overhead, plan)).toBeLessThanOrEqual(0.8 * 1785.5)
  })

  it('the dwell: rows stay apart and the plan still fits where greedy rows would be too close', () => {
    const slow = { ...overhead, radio: { ...radio, minDwellS: 17.5 } }
    const plan = planRetunes(slow)
    const held = plan.rows.slice(1).map((row, i) => row.effectMs - plan.rows[i]!.effectMs)
    expect(Math.min(...held)).toBeGreaterThanOrEqual(17_500)
    expect(worstOf(slow, plan)).toBeLessThanOrEqual(plan.kappa! * 1785.5)
  })

  it('the radio\'s previous row: nothing before it is free, and the first row moves forward only as far as the second asks', () => {
    const falling = (utcMs: number) => 1e6 - Math.max(0, utcMs - START) * 0.1
    const soon: RetuneProblem = { ...flat(0), needed: { frequencyHz: falling }, allowanceHz: 1000, parts: [{ fromMs: START, toMs: START + 20_000 }], radio: { ...radio, minDwellS: 15 } }
    const free = planRetunes(soon)
    expect(free.rows).toHaveLength(2)
    expect(free.rows[1]!.effectMs - free.rows[0]!.effectMs).toBeGreaterThanOrEqual(15_000)
    const bound = planRetunes({ ...soon, notBeforeMs: START })
    expect(bound.rows[0]!.effectMs).toBeGreaterThanOrEqual(START)
  })

  it('a latency with a fraction: commands fall on whole milliseconds exactly', () => {
    const plan = planRetunes({ ...overhead, radio: { ...radio, latencyMs: 12.25 } })
    for (const row of plan.rows) expect((row.effectMs - 12.25) % 1).toBe(0)
    expect(plan.rows[0]!.effectMs).toBeLessThanOrEqual(START)
  })
})

describe('a pass in several workable parts', () => {
  const parts: Span[] = [{ fromMs: START, toMs: START + 100_000 }, { fromMs: START + 500_000, toMs: START + 600_000 }]

  it('retunes between the parts, where nothing is asked', () => {
    const split = { ...overhead, parts }
    const plan = planRetunes(split)
    expect(plan.rows.length).toBe(2)
    expect(plan.rows[1]!.effectMs).toBeGreaterThan(START + 100_000)
    expect(plan.rows[1]!.effectMs).toBeLessThan(START + 500_000)
    expect(worstOf(split, plan)).toBeLessThanOrEqual(0.8 * 1785.5)
  })

  it('and the jump between them may be larger than the link bears while it listens', () => {
    expect(planRetunes({ ...overhead, parts, jumpLimitHz: 500 }).rows.length).toBe(2)
  })

  it('without any part there is nothing to plan', () => {
    expect(planRetunes({ ...overhead, parts: [] }).rows).toEqual([])
  })
})
