import { describe, expect, it } from 'vitest'
import { identityToleranceMs, matchPasses } from '~~/server/domain/prediction/match-passes'

const minute = 60_000
const known = (name: string, minutes: number, gone = false) => ({ name, culminationMs: minutes * minute, gone })
const names = (predictedMinutes: number[], passes: ReturnType<typeof known>[], toleranceMinutes = 30) =>
  matchPasses(predictedMinutes.map(minutes => ({ culminationMs: minutes * minute })), passes, toleranceMinutes * minute).map(match => match?.name ?? null)

describe('which pass a predicted one is', () => {
  it('is the one with the nearest culmination, each once', () => {
    expect(names([1, 96, 500], [known('a', 0), known('b', 95), known('c', 190)])).toEqual(['a', 'b', null])
  })

  it('gives the nearer pair the identity when two want one', () => {
    expect(names([0, 20], [known('a', 15)])).toEqual([null, 'a'])
  })

  it('takes back a pass that was gone only where no other fits', () => {
    expect(names([10], [known('was gone', 10, true), known('a', 12)])).toEqual(['a'])
    expect(names([10], [known('was gone', 10, true)])).toEqual(['was gone'])
  })

  it('reaches half a revolution, thirty minutes at most', () => {
    expect(identityToleranceMs(16)).toBe(30 * minute)
    expect(identityToleranceMs(1)).toBe(30 * minute)
    expect(identityToleranceMs(36)).toBe(20 * minute)
    expect(names([31], [known('a', 0)])).toEqual([null])
  })
})
