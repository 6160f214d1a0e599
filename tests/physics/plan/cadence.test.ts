import { describe, expect, it } from 'vitest'
import type { RetuneProblem } from '../../../shared/physics/plan/plan-retunes'
import { planRetunes } from '../../../shared/physics/plan/plan-retunes'
import type { RadioModel } from '../../../shared/physics/types'

const START = Date.UTC(2026, 10, 30, 12)
const CULMINATION = START + 300_000
const radio: RadioModel = { stepHz: 1, offsetHz: 0, minDwellS: 1, latencyMs: 50, latencyUncertaintyMs: 0, cadenceS: 1 }

/** First-order Doppler at 437 MHz of a circular orbit at 500 km over a station in its plane, v 7677.2 m/s against the ground (mechanics). */
function needed(utcMs: number): number {
  const [earth, orbit, speed] = [6_378_137, 6_878_137, 7677.2]
  const angle = speed / orbit * (utcMs - CULMINATION) / 1000
  const range = Math.sqrt(earth ** 2 + orbit ** 2 - 2 * earth * orbit * Math.cos(angle))
  return 437e6 - 437e6 * earth * speed * Math.sin(angle) / range / 299_792_458
}
const problem = (changes: Partial<RetuneProblem> = {}): RetuneProblem => ({
  needed: { frequencyHz: needed }, uncertaintyHz: () => 0, allowanceHz: 200, parts: [{ fromMs: START, toMs: START + 600_000 }],
  radio, jumpLimitHz: null, bandLowHz: null, bandHighHz: null, ...changes,
})
const plan = (changes: Partial<RetuneProblem> = {}) => planRetunes(problem(changes))
const worst = ({ rows }: ReturnType<typeof plan>, shift = 0) => Math.max(...rows.flatMap((row, i) => {
  const end = rows[i + 1]?.effectMs ?? START + 600_000
  return Array.from({ length: 11 }, (_, n) => row.effectMs + (end - row.effectMs) * n / 10)
    .map(at => Math.abs(needed(at) - row.frequencyHz - row.slopeHzPerS * (at - row.effectMs) / 1000 - shift))
}))

describe('a radio retuned at a cadence', () => {
  it('of one second at 437 MHz and 500 km is 80 Hz off at culmination, half of what setting for the span\'s start leaves', () => {
    // 159.3 Hz/s at most, held for a second: 80 Hz centred, 159 Hz from the start (physics of the orbit, worked by hand).
    const { rows, kappa, excessHz } = plan()
    expect(rows).toHaveLength(600)
    expect(worst({ rows, kappa, excessHz })).toBeGreaterThan(79)
    expect(worst({ rows, kappa, excessHz })).toBeLessThan(80.5)
    const started = rows.map(row => ({ ...row, frequencyHz: needed(row.effectMs) }))
    expect(worst({ rows: started, kappa, excessHz })).toBeCloseTo(159.2, 0)
    expect({ kappa, excessHz }).toEqual({ kappa: 0.8, excessHz: 0 })
  })

  it('takes effect every so many seconds from the first workable instant on, on the grid, wherever the curve is', () => {
    const { rows } = plan({ radio: { ...radio, stepHz: 12.5, cadenceS: 20 } })
    rows.forEach((row, i) => {
      expect(row.effectMs).toBe(START + i * 20_000)
      expect(row.frequencyHz % 12.5).toBe(0)
      const [one, other] = [needed(row.effectMs), needed(Math.min(START + 600_000, row.effectMs + 20_000))]
      expect(Math.abs(row.frequencyHz - (one + other) / 2)).toBeLessThanOrEqual(6.25 + 0.1)
    })
  })

  it('says by how much it passes the allowance, and when it needs the whole of it', () => {
    expect(plan({ allowanceHz: 90 }).kappa).toBe(1)
    const tight = plan({ allowanceHz: 50 })
    expect(tight.kappa).toBeNull()
    expect(tight.excessHz).toBeGreaterThan(29)
    expect(tight.excessHz).toBeLessThan(31)
  })

  it('with ramps leaves far less, by the slope that leaves least', () => {
    const ramped = plan({ radio: { ...radio, cadenceS: 10, ramp: { slopeStepHzPerS: 1, maxSlopeHzPerS: 500 } } })
    // Over 10 s the S bends by |f''|·L²/16 at most for the best line, with |f''| below 159.3·0.86/65 s; half a step of each grid beside.
    expect(worst(ramped)).toBeLessThan(2.2 * 100 / 16 + 0.5 + 0.25 * 10)
    const free = plan({ radio: { ...radio, cadenceS: 10 } })
    expect(worst(free)).toBeGreaterThan(700)
  })

  it('leaves out ticks in quiet spans and where nothing is workable, and keeps the dwell', () => {
    const quiet = [{ fromMs: START + 99_500, toMs: START + 101_500 }]
    const parts = [{ fromMs: START, toMs: START + 200_000 }, { fromMs: START + 400_500, toMs: START + 600_000 }]
    const starts = plan({ quiet, parts, radio: { ...radio, cadenceS: 5 } }).rows.map(row => (row.effectMs - START) / 1000)
    expect(starts).not.toContain(100)
    expect(starts).toContain(95)
    expect(starts).toContain(105)
    expect(starts.filter(at => at > 200 && at < 400)).toEqual([])
    expect(starts).toContain(400)
    expect(plan({ radio: { ...radio, cadenceS: 1, minDwellS: 7.5 } }).rows[1]!.effectMs).toBe(START + 7500)
  })
})
