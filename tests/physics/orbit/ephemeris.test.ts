import { describe, expect, it } from 'vitest'
import { createEphemeris, EPHEMERIS_PAD_MS } from '../../../shared/physics/orbit/ephemeris'
import { propagatorOf, referencePasses, verificationCases } from '../../support/reference-data'
import { elementsFromLines } from '../../support/reference-elements'

const DAY = 86_400_000
const reference = referencePasses().satellites.map(satellite => [satellite.id, satellite.line1, satellite.line2] as const)
const published = verificationCases()
  .filter(c => c.expected_error === null)
  .map(c => [c.satnum, c.line1, c.line2] as const)

describe('interpolated states', () => {
  it.each([...reference, ...published])('of %s agree with SGP4 itself', (_, line1, line2) => {
    const elements = elementsFromLines(line1, line2)
    const propagator = propagatorOf(elements)
    const fromMs = Math.ceil(elements.epochUtcUs / 1000) + 7_200_123
    const toMs = fromMs + 0.7 * DAY
    const ephemeris = createEphemeris(propagator, fromMs, toMs)
    const isLow = elements.meanMotionRevPerDay > 6.4 && elements.eccentricity < 0.2
    let [worstM, worstMps] = [0, 0]
    for (let t = fromMs; t <= toMs; t += 17_431.7) {
      const direct = propagator.at(t)
      if (!direct.ok) throw new Error(direct.error)
      const state = ephemeris.stateAt(t)!
      worstM = Math.max(worstM, Math.hypot(...state.positionM.map((value, i) => value - direct.positionM[i]!)))
      worstMps = Math.max(worstMps, Math.hypot(...state.velocityMps.map((value, i) => value - direct.velocityMps[i]!)))
    }
    // Source: SGP4 at the same instants; that is what the interpolation stands for.
    expect(worstM).toBeLessThan(isLow ? 1e-3 : 1e-2)
    expect(worstMps).toBeLessThan(isLow ? 1e-5 : 1e-4)
    expect(worstM + worstMps).toBeGreaterThan(0)
  })
})

describe('an ephemeris', () => {
  const [, line1, line2] = reference[0]!
  const propagator = propagatorOf(elementsFromLines(line1, line2))
  const fromMs = Date.UTC(2026, 11, 1)

  it('gives the same state at one instant whatever span was asked for', () => {
    const long = createEphemeris(propagator, fromMs, fromMs + DAY)
    const short = createEphemeris(propagator, fromMs + DAY / 2 - 1_800_017, fromMs + DAY / 2 + 1_800_000)
    expect(short.stateAt(fromMs + DAY / 2 + 4321.5)).toEqual(long.stateAt(fromMs + DAY / 2 + 4321.5))
  })

  it('answers on, between and beside its ends, and with null outside', () => {
    const ephemeris = createEphemeris(propagator, fromMs, fromMs + 1000)
    expect([ephemeris.fromMs, ephemeris.toMs]).toEqual([fromMs - EPHEMERIS_PAD_MS, fromMs + 1000 + EPHEMERIS_PAD_MS])
    for (const t of [ephemeris.fromMs, fromMs, fromMs + 500, fromMs + 1000, ephemeris.toMs]) {
      const direct = propagator.at(t)
      if (!direct.ok) throw new Error(direct.error)
      const state = ephemeris.stateAt(t)!
      expect(Math.hypot(...state.positionM.map((value, i) => value - direct.positionM[i]!))).toBeLessThan(1e-3)
    }
    expect(ephemeris.stateAt(ephemeris.fromMs - 0.01)).toBeNull()
    expect(ephemeris.stateAt(ephemeris.toMs + 0.01)).toBeNull()
    expect(ephemeris.endedBy).toBeNull()
  })

  it('refuses a span that ends before it begins', () => {
    expect(() => createEphemeris(propagator, 2, 1)).toThrow(/fromMs ≤ toMs/)
  })

  // AIAA 2006-6753: 28872 has its last good row at 50 minutes and error 6 at 55; 22312 error 1 at 494.2 minutes.
  it.each([
    ['28872', 50, 55, 'decayed'],
    ['22312', 474.2028672, 494.2028672, 'eccentricity-out-of-range'],
  ])('of %s ends after %d and before %d minutes, %s', (satnum, goodMinutes, badMinutes, error) => {
    const { line1, line2 } = verificationCases().find(c => c.satnum === satnum)!
    const elements = elementsFromLines(line1, line2)
    const epochMs = elements.epochUtcUs / 1000
    const ephemeris = createEphemeris(propagatorOf(elements), epochMs, epochMs + 2 * DAY)
    expect(ephemeris.endedBy).toBe(error)
    expect((ephemeris.toMs - epochMs) / 60_000).toBeGreaterThan(goodMinutes)
    expect((ephemeris.toMs - epochMs) / 60_000).toBeLessThan(badMinutes)
    expect(ephemeris.stateAt(ephemeris.toMs)).not.toBeNull()
    expect(ephemeris.stateAt(ephemeris.toMs + 1)).toBeNull()
  })

  it('is empty in a window after the set has failed, though SGP4 answers there now and then', () => {
    // AIAA 2006-6753: 28872 decays before 55 minutes; at 70 minutes the formulas put it above the ground again.
    const { line1, line2 } = verificationCases().find(c => c.satnum === '28872')!
    const elements = elementsFromLines(line1, line2)
    const late = propagatorOf(elements)
    const fromMs = elements.epochUtcUs / 1000 + 70 * 60_000
    expect(late.at(fromMs).ok).toBe(true)
    const ephemeris = createEphemeris(late, fromMs, fromMs + DAY)
    expect(ephemeris.endedBy).toBe('decayed')
    expect(ephemeris.stateAt(fromMs)).toBeNull()
  })
})
