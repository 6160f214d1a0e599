import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { bestPath } from '../../../shared/physics/plan/best-path'
import type { SmallProblem } from './exhaustive-plan'
import { bestByTryingAll, ratioSteps, worstRatio } from './exhaustive-plan'

const MOST_ROWS = 4

function planned(p: SmallProblem) {
  const curve = {
    anchorMs: 0, referenceHz: 0, timeMs: p.timeMs, offsetHz: p.offsetHz, uncertaintyHz: p.timeMs.map(() => 0),
    beginsPart: p.beginsPart, samplingErrorHz: 0,
  }
  const path = bestPath(curve, { stepHz: p.stepHz, least: p.least, most: p.most }, { dwell: p.dwell, jump: p.jump, notBefore: p.notBefore, quiet: p.quiet }, p.halfWidthHz)
  if (path === null) return null
  const ratio = Math.max(...path.starts.map((start, i) =>
    worstRatio(p, start, path.starts[i + 1] ?? Infinity, path.settings[i]!)))
  return { ...path, ratio }
}

/** Needed frequency in straight pieces, one or two workable parts, every limit now and then. */
const problems: fc.Arbitrary<SmallProblem> = fc.record({
  lengths: fc.array(fc.integer({ min: 1, max: 4 }), { minLength: 2, maxLength: 6 }),
  slopes: fc.array(fc.integer({ min: -9, max: 9 }), { minLength: 6, maxLength: 6 }),
  trend: fc.constantFrom(-7, 0, 5),
  halves: fc.array(fc.integer({ min: 7, max: 18 }), { minLength: 7, maxLength: 7 }),
  gapAt: fc.integer({ min: 0, max: 8 }),
  dwell: fc.integer({ min: 1, max: 4 }),
  jump: fc.constantFrom(Infinity, Infinity, 1, 2),
  notBefore: fc.constantFrom(-Infinity, 0, -1),
  shifts: fc.array(fc.constantFrom(0, 0, 0.25, 0.5, 0.75), { minLength: 7, maxLength: 7 }),
  least: fc.constantFrom(-6, -3, 1),
  most: fc.constantFrom(6, 8, 10),
  quietFrom: fc.integer({ min: 0, max: 16 }), quietFor: fc.constantFrom(-1, -1, 0, 1, 3),
}).map(({ lengths, slopes, trend, halves, gapAt, shifts, quietFrom, quietFor, ...rest }) => {
  const timeMs = [0]
  const offsetHz = [30.37]
  for (const [i, length] of lengths.entries()) {
    timeMs.push(timeMs[i]! + length)
    offsetHz.push(offsetHz[i]! + (slopes[i]! + trend) * length)
  }
  return {
    ...rest, timeMs: timeMs.map((time, j) => time + shifts[j]!), stepHz: 10, quiet: quietFor < 0 ? [] : [[quietFrom, quietFrom + quietFor]] as const,
    offsetHz, halfWidthHz: halves.slice(0, timeMs.length),
    // A gap leaves two knots or more on either side.
    beginsPart: timeMs.map((_, j) => j === 0 || (j === gapAt && j >= 2 && j <= timeMs.length - 2)),
  }
})

describe('the best plan', () => {
  it('moves a falling frequency through two settings at the instant that serves both', () => {
    // Worked by hand: 30 Hz of fall on a 10 Hz grid, half-width 10: settings 20 and 10 serve 30…10 and 20…0.
    const p: SmallProblem = {
      timeMs: [0, 30], offsetHz: [30, 0], halfWidthHz: [10, 10], beginsPart: [true, false], stepHz: 10, least: -9, most: 9,
      dwell: 1, jump: Infinity, notBefore: -Infinity, quiet: [],
    }
    const path = planned(p)
    expect(path).toMatchObject({ starts: [0, 10], settings: [2, 1] })
    expect(path!.ratio).toBeCloseTo(1, 6)
  })

  it('is the one that trying every plan finds: fewest rows, least ratio, earliest, lowest', () => {
    let [retuned, bound] = [0, 0]
    fc.assert(fc.property(problems, (p) => {
      const best = bestByTryingAll(p, MOST_ROWS)
      const path = planned(p)
      if (best === null) {
        expect(path === null || path.starts.length > MOST_ROWS).toBe(true)
        return
      }
      if (best.starts.length > 1) retuned++
      const unbound = bestByTryingAll({ ...p, dwell: 1, jump: Infinity, notBefore: -Infinity, quiet: [] }, MOST_ROWS)!
      if (unbound.starts.join() !== best.starts.join() || unbound.settings.join() !== best.settings.join()) bound++
      expect(path).not.toBeNull()
      expect(path!.starts.length).toBe(best.starts.length)
      expect(ratioSteps(path!.ratio)).toBe(ratioSteps(best.ratio))
      expect(path!.starts).toEqual(best.starts)
      expect(path!.settings).toEqual(best.settings)
    }), { numRuns: 3000, seed: 20261130 })
    expect(retuned).toBeGreaterThan(500)
    expect(bound).toBeGreaterThan(100)
  })
})
