import { describe, expect, it } from 'vitest'
import { budgetParts } from '~/utils/passes/budget-bar'
import { formatMargin, verdictSentence } from '~/utils/passes/verdict-sentence'

const at = (time: string) => `2026-12-01T${time}.000Z`
const holds = {
  verdict: 'holds' as const, worstResidualHz: 214, worstAt: at('03:12:45'), allowanceHz: 1786, margin: 8.346, excess: [], faults: [],
  workable: [{ from: at('03:08:00'), to: at('03:18:00') }], aos: at('03:07:30'), culmination: at('03:13:00'), los: at('03:18:30'),
}
const breaks = { ...holds, verdict: 'breaks' as const, worstResidualHz: 2198, margin: 0.8126 }

describe('the verdict in a sentence', () => {
  it('says how much of the allowance a table that holds takes, and when', () => {
    expect(verdictSentence(holds)).toBe('Holds: at worst 214 Hz of 1\u202F786 Hz allowed, at 03:12:45 UTC, margin ×8.3.')
  })

  it('says how far past the allowance, for how long and where', () => {
    const excess = [{ from: at('03:12:40'), to: at('03:13:18') }]
    expect(verdictSentence({ ...breaks, excess })).toBe('Breaks: 412 Hz past the allowance for 38 s around culmination.')
  })

  it('names the start of a span away from culmination', () => {
    const excess = [{ from: at('03:09:00'), to: at('03:09:38') }]
    expect(verdictSentence({ ...breaks, excess })).toBe('Breaks: 412 Hz past the allowance for 38 s from 03:09:00 UTC.')
  })

  it('counts several spans and adds them up', () => {
    const excess = [{ from: at('03:09:00'), to: at('03:09:20') }, { from: at('03:15:00'), to: at('03:15:18') }]
    expect(verdictSentence({ ...breaks, excess })).toBe('Breaks: 412 Hz past the allowance for 38 s in 2 spans, worst at 03:12:45 UTC.')
  })

  it('says when nothing of the workable part is left', () => {
    expect(verdictSentence({ ...breaks, excess: holds.workable })).toBe('Breaks: 412 Hz past the allowance over the whole workable part.')
  })

  it('tells a broken rule from a residual that is too large', () => {
    const faults = [{ code: 'band', at: at('03:10:00'), message: 'outside the band' }]
    expect(verdictSentence({ ...holds, verdict: 'breaks', faults })).toMatch(/^Breaks: 1 rule is broken; the residual is at worst 214 Hz/)
    expect(verdictSentence({ ...breaks, faults, excess: [{ from: at('03:12:40'), to: at('03:13:18') }] })).toMatch(/around culmination; 1 rule is broken as well\.$/)
  })
})

describe('a margin', () => {
  it('is never rounded up, since 1 is the edge', () => {
    expect([0.9999, 1, 1.14, 1.249, 8.39, 20, 1e6].map(formatMargin)).toEqual(['×0.99', '×1.00', '×1.14', '×1.24', '×8.3', '×20.0', '×>99'])
  })
})

describe('the budget bar', () => {
  // By hand: limits 100 + 20 + 10; spread 2·√(30² + 40²) = 100, shared 900:1600 = 36 and 64.
  const { parts, totalHz } = budgetParts({ stepsHz: -100, timingHz: 20, ut1Hz: 10, orbitHz: 30, oscillatorHz: 40, trimHz: 0 }, 2)

  it('is as long as the budgeted residual', () => {
    expect(totalHz).toBeCloseTo(230, 9)
  })

  it('adds limits whole and shares the root of squares by variance', () => {
    expect(parts.map(part => [part.key, Math.round(part.addsHz * 1e6) / 1e6])).toEqual([['steps', 100], ['timing', 20], ['ut1', 10], ['orbit', 36], ['oscillator', 64], ['trim', 0]])
  })

  it('states each spread by itself, k times one sigma', () => {
    expect(parts.filter(part => part.kind === 'spread').map(part => part.aloneHz)).toEqual([60, 80, 0])
  })
})
