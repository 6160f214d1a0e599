import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { overlapMs, pairsOf, settle } from '../../server/domain/antennas/settle'

const want = (passId: string, busyFromMs: number, busyToMs: number, priority = 0) => ({ passId, antennaId: 'dish', priority, aosMs: busyFromMs + 60, busyFromMs, busyToMs })
const names = (down: ReturnType<typeof settle>) => [...down].map(([loser, { for: winner, byDefault }]) => `${loser} for ${winner.passId}${byDefault ? '' : ' as decided'}`).sort()

// Expectations worked out by hand from the rule: the higher priority, then the earlier AOS.
describe('who has an antenna', () => {
  it('is the higher priority, then the earlier AOS; passes that only touch do not want it at one time', () => {
    expect(names(settle([want('a', 0, 100), want('b', 50, 150, 5)], []))).toEqual(['a for b'])
    expect(names(settle([want('a', 0, 100), want('b', 50, 150)], []))).toEqual(['b for a'])
    expect(names(settle([want('a', 0, 100), want('b', 100, 150)], []))).toEqual([])
    expect(pairsOf([want('a', 0, 100), want('b', 99, 150), { ...want('c', 0, 150), antennaId: 'yagi' }]).map(pair => pair.map(({ passId }) => passId).join())).toEqual(['a,b'])
  })

  it('of three that want it all at once is one; of a chain the two outer ones, when the middle one stands down', () => {
    expect(names(settle([want('a', 0, 100, 1), want('b', 10, 110, 3), want('c', 20, 120, 2)], []))).toEqual(['a for b', 'c for b'])
    expect(names(settle([want('a', 0, 100, 3), want('b', 50, 150, 2), want('c', 120, 220, 1)], []))).toEqual(['b for a'])
    expect(names(settle([want('a', 0, 100, 1), want('b', 50, 150, 3), want('c', 120, 220, 2)], []))).toEqual(['a for b', 'c for b'])
  })

  it('is who a person gave it to, whatever the priorities; the others settle around that', () => {
    const three = [want('a', 0, 100, 1), want('b', 10, 110, 3), want('c', 20, 120, 2)]
    expect(names(settle(three, [{ antennaId: 'dish', passId: 'a', otherPassId: 'b' }]))).toEqual(['a for c', 'b for a as decided'])
    expect(names(settle(three, [{ antennaId: 'dish', passId: 'a', otherPassId: 'b' }, { antennaId: 'dish', passId: 'a', otherPassId: 'c' }]))).toEqual(['b for a as decided', 'c for a as decided'])
    expect(names(settle([want('a', 0, 100), want('b', 100, 200)], [{ antennaId: 'dish', passId: 'b', otherPassId: 'a' }])), 'a decision on passes that no longer meet').toEqual([])
  })

  it('leaves no two passes with the antenna at one time, and none down for a pass that it does not meet', () => {
    const wants = fc.array(fc.record({ from: fc.integer({ min: 0, max: 300 }), length: fc.integer({ min: 1, max: 120 }), priority: fc.integer({ min: 0, max: 3 }) }), { minLength: 1, maxLength: 7 })
      .map(list => list.map(({ from, length, priority }, i) => want(`p${i}`, from, from + length, priority)))
    fc.assert(fc.property(wants, fc.array(fc.tuple(fc.nat(6), fc.nat(6)), { maxLength: 4 }), (list, given) => {
      const decisions = given.filter(([a, b]) => a !== b && a < list.length && b < list.length && !given.some(([x, y]) => x === b && y === a))
        .map(([a, b]) => ({ antennaId: 'dish', passId: `p${a}`, otherPassId: `p${b}` }))
      const down = settle(list, decisions)
      const having = list.filter(({ passId }) => !down.has(passId))
      for (const [i, one] of having.entries()) for (const other of having.slice(i + 1)) expect(overlapMs(one, other)).toBeLessThanOrEqual(0)
      for (const [loser, { for: winner }] of down) expect(overlapMs(list.find(({ passId }) => passId === loser)!, winner)).toBeGreaterThan(0)
    }), { numRuns: 500 })
  })
})
