import { describe, expect, it } from 'vitest'
import { budgetAt, uncertaintyBy, uncertaintyHz } from '../../../shared/physics/plan/budget'
import type { BudgetModel } from '../../../shared/physics/types'

const budget: BudgetModel = {
  clockErrorMs: 20, ut1MinusUtcS: 0, ut1BoundS: 0.9, alongTrackSigmaS: () => 0.1, spacecraftPpm: 3, stationPpm: 4, k: 2,
}
const at = { utcMs: 0, carrierHz: 400e6, rateHzPerS: -150, alongTrackHzPerS: -160, ut1HzPerS: 10 }

describe('the error budget at one instant', () => {
  it('takes each cause times how fast the frequency answers to it', () => {
    // By hand: 25 ms·150 Hz/s; 0.9 s·10 Hz/s; 0.1 s·160 Hz/s; 400 MHz·5 ppm/√3, as limits of 3 and 4 ppm are spread evenly.
    const parts = budgetAt(at, budget, { latencyUncertaintyMs: 5 })
    expect(parts.timingHz).toBeCloseTo(3.75, 9)
    expect(parts.ut1Hz).toBeCloseTo(9, 9)
    expect(parts.orbitHz).toBeCloseTo(16, 9)
    expect(parts.oscillatorHz).toBeCloseTo(2000 / Math.sqrt(3), 9)
    expect(parts.trimHz).toBe(0)
  })

  it('adds limits, and k times the root of squares of the spreads', () => {
    // By hand: 1 + 2 + 3·√(2² + 3² + 6²) = 24.
    expect(uncertaintyHz({ timingHz: 1, ut1Hz: 2, orbitHz: 2, oscillatorHz: 3, trimHz: 6 }, 3)).toBeCloseTo(24, 12)
  })

  it('comes to the same at once', () => {
    // By hand, rate −150 as the sum of −160 and 10: 3.75 + 9 + 2·√(16² + (2000/√3)²).
    expect(uncertaintyBy(400e6, budget, { latencyUncertaintyMs: 5 })(0, -160, 10)).toBeCloseTo(12.75 + 2 * Math.sqrt(256 + 4e6 / 3), 9)
  })

  it('asks the spread of the orbit at its instant', () => {
    const aging = { ...budget, alongTrackSigmaS: (utcMs: number) => utcMs / 1e6 }
    expect(budgetAt({ ...at, utcMs: 2e6 }, aging, { latencyUncertaintyMs: 0 }).orbitHz).toBeCloseTo(320, 9)
    const sure = { ...aging, clockErrorMs: 0, ut1BoundS: 0, spacecraftPpm: 0, stationPpm: 0 }
    expect(uncertaintyBy(400e6, sure, { latencyUncertaintyMs: 0 })(2e6, -160, 10)).toBeCloseTo(640, 9)
  })
})
