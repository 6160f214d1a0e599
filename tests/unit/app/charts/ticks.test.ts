import { describe, expect, it } from 'vitest'
import { clockTicks, valueTicks } from '~/utils/charts/ticks'

describe('marks on an axis', () => {
  it('stand on whole clock times, no more than asked for', () => {
    const from = Date.parse('2026-12-01T03:08:12.345Z')
    const ticks = clockTicks(from, from + 11 * 60_000, 7)
    expect(ticks.map(ms => new Date(ms).toISOString().slice(11, 19))).toEqual(['03:10:00', '03:12:00', '03:14:00', '03:16:00', '03:18:00'])
  })

  it('stand on round values, zero being zero', () => {
    expect(valueTicks(-10_204, 10_198, 5)).toEqual([-10_000, -5000, 0, 5000, 10_000])
    expect(valueTicks(-0.25, 0.25, 5)).toEqual([-0.2, -0.1, 0, 0.1, 0.2])
  })

  it('are none for an empty range', () => {
    expect(valueTicks(3, 3, 5)).toEqual([])
  })
})
