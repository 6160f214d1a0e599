import { describe, expect, it } from 'vitest'
import { crossingBetween, everySecond, withPeaks, withTurns } from '../../../shared/physics/plan/check-scan'

describe('where the checker looks', () => {
  it('is every second from the start, and the end', () => {
    expect(everySecond(250, 3100)).toEqual([250, 1250, 2250, 3100])
    expect(everySecond(250, 250)).toEqual([250])
  })

  it('adds the instant between two seconds at which a rate changes sign', () => {
    const turns = withTurns([0, 1000, 2000], utcMs => 1337 - utcMs)
    expect(turns).toHaveLength(4)
    expect(turns[2]).toBeCloseTo(1337, 2)
  })

  it('adds the peak that hides between two seconds', () => {
    // A parabola, known at its vertex, and the same upside down, which has no peak.
    const parabola = (utcMs: number) => -((utcMs - 2345.6) ** 2)
    const instants = withPeaks([0, 1000, 2000, 3000, 4000], parabola)
    expect(instants).toHaveLength(6)
    expect(Math.min(...instants.map(at => Math.abs(at - 2345.6)))).toBeLessThan(0.1)
    expect(instants).toEqual([...instants].sort((a, b) => a - b))
    expect(withPeaks([0, 1000, 2000, 3000, 4000], utcMs => -parabola(utcMs))).toHaveLength(5)
  })

  it('finds the last instant at which something holds', () => {
    expect(crossingBetween(1000, 2000, utcMs => utcMs < 1234.5)).toBeCloseTo(1234.5, 2)
  })
})
