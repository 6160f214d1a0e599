import { describe, expect, it } from 'vitest'
import { checkTable } from '../../../shared/physics/plan/check-table'
import type { RadioModel, Span } from '../../../shared/physics/types'
import { dayOf, highest, smallBudget, steppedRadio, tableOf, uhfLink } from '../../support/tables'

const day = dayOf('SSO500', 'S42')
const pass = highest(day.passes)
const query = { ...day, link: uhfLink, linkMinElevationRad: 0, budget: smallBudget, pass }
const radios: [string, RadioModel][] = [
  ['steps', steppedRadio], ['ramps', { ...steppedRadio, ramp: { slopeStepHzPerS: 0.5, maxSlopeHzPerS: 1000 } }],
  ['keeps a cadence', { ...steppedRadio, cadenceS: 5 }],
]
/** Four seconds in every ten: a schedule of frames that no retune may cut. */
const quiet: Span[] = Array.from({ length: 100 }, (_, i) => ({ fromMs: Math.ceil(pass.aosMs) - 60_500 + i * 10_000, toMs: Math.ceil(pass.aosMs) - 56_500 + i * 10_000 }))

describe.each(radios)('quiet spans, for a radio that %s', (_, radio) => {
  const table = tableOf({ ...query, radio, quiet })

  it('have no retune inside, the first row included, and the table still holds', () => {
    expect(table.check).toMatchObject({ verdict: 'holds', faults: [] })
    for (const row of table.rows) {
      const effectMs = row.atMs + radio.latencyMs
      expect(quiet.every(span => effectMs < span.fromMs || effectMs > span.toMs)).toBe(true)
    }
    expect(table.rows.length).toBeGreaterThan(2)
  })

  it('fault a retune that takes effect in one, its edges included, in the sense of effect and not of command', () => {
    const row = table.rows[1]!
    const codes = (span: Span) => checkTable({ ...query, radio, parts: table.parts, rows: table.rows, quiet: [span] }).faults.map(fault => fault.code)
    const effectMs = row.atMs + radio.latencyMs
    expect(codes({ fromMs: effectMs, toMs: effectMs + 100 })).toEqual(['quiet'])
    expect(codes({ fromMs: effectMs - 100, toMs: effectMs })).toEqual(['quiet'])
    expect(codes({ fromMs: row.atMs - 10, toMs: effectMs - 1 })).toEqual([])
  })

  it('are found broken by rows planned without them', () => {
    const free = tableOf({ ...query, radio })
    const inside = [{ fromMs: free.rows[1]!.atMs, toMs: free.rows[1]!.atMs + 100 }]
    expect(checkTable({ ...query, radio, parts: free.parts, rows: free.rows, quiet: inside })).toMatchObject({ verdict: 'breaks' })
    expect(tableOf({ ...query, radio, quiet: inside }).check.faults).toEqual([])
  })

  it('that leave no room for a retune in half the pass break for the residual, not for a fault', () => {
    const whole = [{ fromMs: pass.aosMs - 10_000, toMs: pass.culminationMs }]
    const table = tableOf({ ...query, radio, quiet: whole })
    expect(table.check.faults).toEqual([])
    expect(table.check.verdict).toBe('breaks')
    expect(table.rows[0]!.atMs + radio.latencyMs).toBeLessThan(pass.aosMs - 10_000)
  })
})
