import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { RampLimits } from '../../../shared/physics/plan/ramp-path'
import { rampPath } from '../../../shared/physics/plan/ramp-path'
import type { SmallRamps } from './exhaustive-ramps'
import { fewestByTryingAll, fewestWithJumps, rampFits } from './exhaustive-ramps'

const MOST_ROWS = 3
const unbound = { bounds: null, jumpHz: Infinity, quiet: [], lead: 0, band: [-Infinity, Infinity] } as const

function planned(p: SmallRamps) {
  const curve = {
    anchorMs: 0, referenceHz: 0, timeMs: p.timeMs, offsetHz: p.offsetHz, uncertaintyHz: p.timeMs.map(() => 0),
    beginsPart: p.beginsPart, samplingErrorHz: 0,
  }
  const limits: RampLimits = {
    ...unbound, slopes: { stepHzPerS: p.slopeStepHzPerS, most: p.mostSlope }, dwell: p.dwell, notBefore: 0, quiet: p.quiet,
    jumpHz: p.jumpHz,
  }
  return rampPath(curve, { stepHz: p.stepHz, least: -Infinity, most: Infinity }, limits, p.halfWidthHz)
}

/** Needed frequency in straight pieces over some milliseconds, one or two workable parts, every limit now and then. */
const problems: fc.Arbitrary<SmallRamps> = fc.record({
  lengths: fc.array(fc.integer({ min: 1, max: 4 }), { minLength: 2, maxLength: 5 }),
  slopes: fc.array(fc.integer({ min: -9, max: 9 }), { minLength: 5, maxLength: 5 }),
  halves: fc.array(fc.integer({ min: 5, max: 12 }), { minLength: 6, maxLength: 6 }),
  gapAt: fc.integer({ min: 0, max: 8 }),
  dwell: fc.integer({ min: 1, max: 4 }),
  quietFrom: fc.integer({ min: 1, max: 14 }), quietFor: fc.constantFrom(-1, -1, 0, 2),
  slopeStep: fc.constantFrom(1000, 2500, 4000), mostSlope: fc.constantFrom(1, 2, 4),
  shifts: fc.array(fc.constantFrom(0, 0, 0.25, 0.5), { minLength: 6, maxLength: 6 }),
}).map(({ lengths, slopes, halves, gapAt, quietFrom, quietFor, slopeStep, shifts, ...rest }) => {
  const timeMs = [0]
  const offsetHz = [31.7]
  for (const [i, length] of lengths.entries()) {
    timeMs.push(timeMs[i]! + length)
    offsetHz.push(offsetHz[i]! + slopes[i]! * length)
  }
  return {
    ...rest, timeMs: timeMs.map((time, j) => time + (j === 0 ? 0 : shifts[j]!)), stepHz: 10, offsetHz, halfWidthHz: halves.slice(0, timeMs.length),
    beginsPart: timeMs.map((_, j) => j === 0 || (j === gapAt && j >= 2 && j <= timeMs.length - 2)),
    slopeStepHzPerS: slopeStep, quiet: quietFor < 0 ? [] : [[quietFrom, quietFrom + quietFor]] as const, jumpHz: Infinity,
  }
})

describe('rows that ramp', () => {
  it('follow a straight fall with one row, where constants need many', () => {
    // By hand: 100 Hz of fall in 10 ms is −10 000 Hz/s; the half-width of 4 Hz is less than half a grid step.
    const path = planned({
      timeMs: [0, 10], offsetHz: [100, 0], halfWidthHz: [4, 4], beginsPart: [true, false], stepHz: 10, slopeStepHzPerS: 1000, mostSlope: 20,
      dwell: 1, quiet: [], jumpHz: Infinity,
    })
    expect(path).toEqual({ starts: [0], settings: [10], slopes: [-10] })
  })

  it('are as few as trying every start, setting and slope finds, outside quiet stretches, a dwell apart', () => {
    let [retuned, without] = [0, 0]
    fc.assert(fc.property(problems, (p) => {
      const fewest = fewestByTryingAll(p, MOST_ROWS)
      const path = planned(p)
      if (path !== null) expect(rampFits(p, path)).toBe(true)
      if (fewest === null) {
        without++
        expect(path === null || path.starts.length > MOST_ROWS).toBe(true)
        return
      }
      if (fewest > 1) retuned++
      expect(path?.starts.length).toBe(fewest)
    }), { numRuns: 1500, seed: 20261201 })
    expect(retuned).toBeGreaterThan(300)
    expect(without).toBeGreaterThan(100)
  })

  it('are as few as trying every plan finds where a jump limit binds, too', () => {
    let [bound, without] = [0, 0]
    fc.assert(fc.property(problems, fc.constantFrom(3, 6, 10), (p, jumpHz) => {
      const small = { ...p, jumpHz }
      const fewest = fewestWithJumps(small, MOST_ROWS)
      const path = planned(small)
      if (fewest !== fewestByTryingAll(p, MOST_ROWS)) bound++
      if (fewest === null) {
        without++
        expect(path === null || path.starts.length > MOST_ROWS).toBe(true)
        return
      }
      expect(path?.starts.length).toBe(fewest)
    }), { numRuns: 1500, seed: 11 })
    expect(bound).toBeGreaterThan(100)
    expect(without).toBeGreaterThan(300)
  })

  it('never jump by more than the limit at a workable instant', () => {
    let found = 0
    fc.assert(fc.property(problems, fc.constantFrom(3, 6, 10), (p, jumpHz) => {
      const path = planned({ ...p, jumpHz })
      if (path === null) return
      if (path.starts.length > 1) found++
      expect(rampFits({ ...p, jumpHz }, path)).toBe(true)
    }), { numRuns: 1500, seed: 437 })
    expect(found).toBeGreaterThan(100)
  })
})
