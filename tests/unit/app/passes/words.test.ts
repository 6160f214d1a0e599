import { describe, expect, it } from 'vitest'
import { budgetParts } from '~/utils/passes/budget-bar'
import { historyWords } from '~/utils/passes/history-words'
import { stripsSentence } from '~/utils/passes/strips-sentence'
import { formatMargin, verdictSentence } from '~/utils/passes/verdict-sentence'
import { worstTable } from '~/utils/passes/worst-table'

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

describe('the words beside the strips', () => {
  const row = { at: at('03:08:00'), frequencyHz: 0, slopeHzPerS: 0, dopplerHz: 0, rangeRateMps: 0, azimuthDeg: 0, elevationDeg: 0, lossDb: null }
  const data = { fromMs: 0, toMs: 1000, needed: { atMs: [0, 1000], value: [10_204, -10_198], ratePerS: [0, 0] }, uncertaintyHz: [0, 0], elevationDeg: [0, 0], horizonDeg: [0, 0], settings: [], effectMs: [], workable: [], allowanceHz: 1786 }
  const table = { maxElevationDeg: 64.24, culmination: at('03:13:00'), allowanceHz: 1786, worstResidualHz: 214, retunes: [{ ...row, residualMinHz: -104, residualMaxHz: 60 }, { ...row, residualMinHz: -90, residualMaxHz: 98 }] }

  it('tell who cannot see them how the curve runs and what the retunes leave', () => {
    expect(stripsSentence(data, table)).toBe('The needed offset falls from +10\u202F204 Hz at AOS to \u221210\u202F198 Hz at LOS. 2 retunes follow it and leave between \u2212104 and +98 Hz. Budgeted, that is 214 Hz at worst, of 1\u202F786 Hz allowed. Elevation culminates at 64.2° at 03:13:00 UTC.')
  })

  it('say so when no retune follows', () => {
    expect(stripsSentence(data, { ...table, retunes: [] })).toContain('No retune follows it.')
  })
})

describe('a pass with several tables', () => {
  const table = (verdict: 'holds' | 'tight' | 'breaks', margin: number) => ({ id: `${verdict}${margin}`, linkId: '', linkName: '', direction: 'downlink' as const, state: 'drafted' as const, verdict, margin })

  it('is known by the one with least margin, a broken rule before all', () => {
    expect(worstTable([table('holds', 3), table('tight', 1.1), table('tight', 1.05)])?.margin).toBe(1.05)
    expect(worstTable([table('tight', 1.05), table('breaks', 4)])?.verdict).toBe('breaks')
    expect(worstTable([])).toBeNull()
  })
})

describe('a step of a table’s life', () => {
  it('names revision, deed and person', () => {
    expect(historyWords({ action: 'table.second', by: 'Ines Okafor', revision: 2 })).toBe('Revision 2 approved as second person by Ines Okafor')
    expect(historyWords({ action: 'table.return-to-draft', by: 'the server', revision: null })).toBe('Table returned to draft by the server')
  })
})
