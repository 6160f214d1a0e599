import { describe, expect, it } from 'vitest'
import { planeAngleRad, trackDifference } from '../../../shared/physics/orbit/track-difference'
import { circularStates, meanMotion } from '../../support/circular-orbit'

const RAD = Math.PI / 180
const A = 6_878_137
const T0 = Date.UTC(2026, 11, 1)
const orbit = (change: Partial<Parameters<typeof circularStates>[0]> = {}) =>
  circularStates({ radiusM: A, inclinationRad: 97.4 * RAD, nodeRad: 40 * RAD, phaseRad: 30 * RAD, epochMs: T0, ...change })
const differenceAt = (utcMs: number, change: Parameters<typeof orbit>[0], from: Parameters<typeof orbit>[0] = {}) => trackDifference(orbit(from)(utcMs), orbit(change)(utcMs))

// Two circles by plain mechanics, from tests/support; every expected figure is a closed form of orbital mechanics.
describe('radial, along and cross track', () => {
  it.each([[0.01], [0.1], [5], [-90]])('are the radius times the anomaly for a spacecraft %f° ahead on the same circle, and nothing else', (degrees) => {
    const { radialM, alongM, crossM } = differenceAt(T0 + 123_456, { phaseRad: (30 + degrees) * RAD })
    expect(alongM).toBeCloseTo(A * degrees * RAD, 3)
    expect(radialM).toBeCloseTo(0, 3)
    expect(crossM).toBeCloseTo(0, 3)
  })

  it.each([[0], [30], [90], [200]])('are r·Δi·sin u across for an orbit tilted a little more, at u = %f°', (u) => {
    const tilt = 0.01 * RAD
    const { radialM, alongM, crossM } = differenceAt(T0, { inclinationRad: 97.4 * RAD + tilt, phaseRad: u * RAD }, { phaseRad: u * RAD })
    expect(crossM).toBeCloseTo(A * Math.sin(tilt) * Math.sin(u * RAD), 3)
    expect(radialM).toBeCloseTo(0, 3)
    // The cosine of the tilt along it: 0.1 m at most.
    expect(Math.abs(alongM)).toBeLessThan(0.11)
  })

  it('are r·ΔΩ·sin i across at the node for an orbit whose node is turned, and r·ΔΩ·cos i along', () => {
    const turn = 0.01 * RAD
    const { alongM, crossM } = differenceAt(T0, { nodeRad: 40 * RAD + turn, phaseRad: 0 }, { phaseRad: 0 })
    expect(alongM).toBeCloseTo(A * turn * Math.cos(97.4 * RAD), 1)
    expect(Math.abs(crossM)).toBeCloseTo(A * turn * Math.sin(97.4 * RAD), 1)
    // Towards r × v: at the ascending node of a retrograde orbit that leans west, an orbit whose node is further east lies on the other side.
    expect(crossM).toBeLessThan(0)
  })

  it('are the difference of heights, and −3π·Δa along after each revolution on a higher circle', () => {
    const higher = 100
    const revolutionMs = 2 * Math.PI / meanMotion(A) * 1000
    expect(differenceAt(T0, { radiusM: A + higher }).radialM).toBeCloseTo(higher, 3)
    for (const revolutions of [1, 5]) {
      // First order in Δa/a: a hundredth of a metre in a kilometre here.
      const expected = -3 * Math.PI * higher * revolutions
      expect(Math.abs(differenceAt(T0 + revolutions * revolutionMs, { radiusM: A + higher }).alongM / expected - 1)).toBeLessThan(5e-5)
    }
  })

  it('tell by how much two planes are turned', () => {
    expect(planeAngleRad(orbit()(T0), orbit({ inclinationRad: 98 * RAD, phaseRad: 2 })(T0))).toBeCloseTo(0.6 * RAD, 9)
    expect(planeAngleRad(orbit()(T0), orbit()(T0 + 1e6))).toBeLessThan(1e-7)
  })
})
