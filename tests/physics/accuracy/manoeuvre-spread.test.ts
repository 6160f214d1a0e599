import { describe, expect, it } from 'vitest'
import { manoeuvreSpreadM } from '../../../shared/physics/accuracy/manoeuvre-spread'
import { alongTrackSigmaS } from '../../../shared/physics/accuracy/prior'

const DAY_MS = 86_400_000
const T0 = Date.UTC(2026, 11, 1)
const GM = 3.986004418e14

describe('what a burn leaves open along the track', () => {
  // Mechanics: 1 cm/s at 500 km raises the semi-major axis by 18.1 m and moves the spacecraft by 2.59 km a day.
  it('is 2.592 km a day for one centimetre a second', () => {
    expect(manoeuvreSpreadM({ startMs: T0, speedSigmaMps: 0.01 }, T0 + DAY_MS)).toBeCloseTo(2592, 6)
    expect(manoeuvreSpreadM({ startMs: T0, speedSigmaMps: 0.01 }, T0 - DAY_MS)).toBe(0)
  })

  it('is what two circular orbits drift apart by whose speeds differ as vis-viva says', () => {
    const [a, dv] = [6_878_137, 0.01]
    const speed = Math.sqrt(GM / a)
    // Vis-viva: v² = GM(2/r − 1/a) with r = a before the burn.
    const raised = 1 / (2 / a - (speed + dv) ** 2 / GM)
    expect(raised - a).toBeCloseTo(18.1, 1)
    const driftM = a * (Math.sqrt(GM / a ** 3) - Math.sqrt(GM / raised ** 3)) * 86_400
    expect(Math.abs(manoeuvreSpreadM({ startMs: T0, speedSigmaMps: dv }, T0 + DAY_MS) - driftM)).toBeLessThan(1)
  })

  it('joins the spread by age as root of squares', () => {
    // By hand: 3 km by age and 4 km by the burn make 5 km, one second at 5000 m/s.
    const model = { floorKm: 3, growthKmPerDay: 0, epochMs: T0, speedMps: 5000 }
    const burn = { startMs: T0, speedSigmaMps: 4000 / (3 * 86_400) }
    expect(alongTrackSigmaS({ ...model, manoeuvres: [burn] })(T0 + DAY_MS)).toBeCloseTo(1, 12)
    expect(alongTrackSigmaS({ ...model, manoeuvres: [burn] })(T0)).toBeCloseTo(0.6, 12)
    expect(alongTrackSigmaS({ ...model, manoeuvres: [] })(T0 + DAY_MS)).toBeCloseTo(0.6, 12)
  })
})
