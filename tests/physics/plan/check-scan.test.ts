import { describe, expect, it } from 'vitest'
import { crossingBetween, scan } from '../../../shared/physics/plan/check-scan'

/** Everything that a scan visits. */
function scanOf(fromMs: number, toMs: number, value: (utcMs: number) => number, rate?: (utcMs: number) => number) {
  const visited = { atMs: [] as number[], value: [] as number[] }
  scan(fromMs, toMs, value, rate, (atMs, v) => {
    visited.atMs.push(atMs)
    visited.value.push(v)
  })
  return visited
}

describe('where the checker looks', () => {
  const rising = (utcMs: number) => utcMs

  it('is every second from the start, and the end', () => {
    expect(scanOf(250, 3100, rising).atMs).toEqual([250, 1250, 2250, 3100])
    expect(scanOf(250, 3250, rising).atMs).toEqual([250, 1250, 2250, 3250])
    expect(scanOf(250, 250, rising).atMs).toEqual([250])
  })

  it('adds the instant between two seconds at which a rate changes sign, either way', () => {
    for (const sign of [1, -1]) {
      const { atMs, value } = scanOf(0, 2000, rising, utcMs => sign * (1337 - utcMs))
      expect(atMs).toHaveLength(4)
      expect(atMs[2]).toBeCloseTo(1337, 2)
      expect(value).toEqual(atMs)
    }
  })

  it('adds the peak that hides between two seconds, in its place', () => {
    // Parabolas, known at their vertices, on either side of the highest second, and the same upside down, which has no peak.
    for (const vertex of [2345.6, 1654.4]) {
      const parabola = (utcMs: number) => -((utcMs - vertex) ** 2)
      const { atMs, value } = scanOf(0, 4000, parabola)
      expect(atMs).toHaveLength(6)
      expect(Math.min(...atMs.map(at => Math.abs(at - vertex)))).toBeLessThan(0.1)
      expect(atMs).toEqual([...atMs].sort((a, b) => a - b))
      expect(value).toEqual(atMs.map(parabola))
      expect(scanOf(0, 4000, utcMs => -parabola(utcMs)).atMs).toHaveLength(5)
    }
  })

  it('finds every peak of several', () => {
    // Peaks of a sine of 3.1 s: at a quarter of a period and each period after it.
    const { atMs } = scanOf(0, 30_000, utcMs => Math.sin(2 * Math.PI * utcMs / 3100))
    for (let peak = 775; peak < 30_000; peak += 3100) expect(Math.min(...atMs.map(at => Math.abs(at - peak)))).toBeLessThan(0.1)
    expect(atMs).toEqual([...atMs].sort((a, b) => a - b))
    expect(atMs).toHaveLength(31 + 10)
  })

  it('finds the last instant at which something holds', () => {
    expect(crossingBetween(1000, 2000, utcMs => utcMs < 1234.5)).toBeCloseTo(1234.5, 2)
  })
})
