import { describe, expect, it } from 'vitest'
import { checkStatesOf } from '../../../shared/physics/plan/check-states'
import { propagatorOf, referencePasses } from '../../support/reference-data'
import { elementsFromLines } from '../../support/reference-elements'

const apart = (a: readonly number[], b: readonly number[]) => Math.hypot(a[0]! - b[0]!, a[1]! - b[1]!, a[2]! - b[2]!)

describe('the checker\'s own states over a part', () => {
  const { satellites } = referencePasses()

  it.each(satellites.map(satellite => [satellite.id, satellite] as const))('are true propagation to 5 mm and 0.02 mm/s through twelve hours of %s', (_, satellite) => {
    // SGP4 itself, which the published verification run holds.
    const propagator = propagatorOf(elementsFromLines(satellite.line1, satellite.line2))
    const fromMs = Date.parse(satellite.windowStart)
    let asked = 0
    for (const [startS, endS] of [[0, 600], [3600, 43_200], [50_000.123, 50_001], [61_234.5, 62_000]] as const) {
      const span = { fromMs: fromMs + startS * 1000, toMs: fromMs + endS * 1000 }
      const { stateAt } = checkStatesOf(propagator, span)
      // Light that left before the part and arrives after it is there too.
      for (let at = span.fromMs - 300; at <= span.toMs + 300; at += (endS - startS) * 1000 / 433.7) {
        const direct = propagator.at(at)
        if (!direct.ok) throw new Error(direct.error)
        const state = stateAt(at)!
        expect(apart(state.positionM, direct.positionM)).toBeLessThan(5e-3)
        expect(apart(state.velocityMps, direct.velocityMps)).toBeLessThan(2e-5)
        asked++
      }
    }
    expect(asked).toBeGreaterThan(1600)
  })

  it('cost a pass of ten minutes a dozen or two propagations', () => {
    const { line1, line2, windowStart } = satellites[0]!
    const propagator = propagatorOf(elementsFromLines(line1, line2))
    let asked = 0
    const fromMs = Date.parse(windowStart)
    checkStatesOf({ ...propagator, at: (at) => {
      asked++
      return propagator.at(at)
    } }, { fromMs, toMs: fromMs + 600_000 })
    expect(asked).toBeLessThanOrEqual(32)
  })

  it('are not told of outside the part', () => {
    const { line1, line2, windowStart } = satellites[0]!
    const fromMs = Date.parse(windowStart)
    const { stateAt } = checkStatesOf(propagatorOf(elementsFromLines(line1, line2)), { fromMs, toMs: fromMs + 600_000 })
    expect(stateAt(fromMs - 60_000)).toBeNull()
    expect(stateAt(fromMs + 660_000)).toBeNull()
  })
})
