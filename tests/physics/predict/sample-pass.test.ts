import { describe, expect, it } from 'vitest'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { findPasses } from '../../../shared/physics/orbit/passes'
import { samplePass } from '../../../shared/physics/predict/sample-pass'
import { propagatorOf, referenceDoppler } from '../../support/reference-data'
import { elementsFromLines, RAD, siteFromDegrees } from '../../support/reference-elements'

const reference = referenceDoppler().passes[0]!
const site = siteFromDegrees(reference.station)
const startMs = Date.parse(reference.windowStart) + reference.startS * 1000
const endMs = startMs + (reference.lightTimeDownS.length - 1) * reference.stepS * 1000
const ephemeris = createEphemeris(propagatorOf(elementsFromLines(reference.line1, reference.line2)), startMs, endMs)
// The reference starts below the horizon's edge or at it: the window's start is then the pass's.
const [pass] = findPasses({ ephemeris, site: { ...site, minElevationRad: -5 * RAD }, fromMs: startMs, toMs: endMs, ut1MinusUtcS: 0 }).passes
const options = { ephemeris, site, ut1MinusUtcS: 0, carrierHz: 437.5e6, stepS: reference.stepS }

describe('a pass in samples', () => {
  it.each([['downlink', reference.receivedMinusCarrierHz], ['uplink', reference.transmitMinusCarrierHz]] as const)('bears the %s shift that the independent program has', (direction, columns) => {
    // Source: Skyfield 1.45 (data/README.md), 0.05 Hz and 0.01 m/s.
    const samples = samplePass(pass!, { ...options, direction })
    expect(pass!.aosMs).toBe(startMs)
    const hz = columns['437500000.0']!
    for (const [k, expected] of hz.entries()) {
      const sample = samples.find(s => Math.abs(s.atMs - startMs - k * reference.stepS * 1000) < 0.5)!
      expect(Math.abs(sample.dopplerHz - expected), `sample ${k}`).toBeLessThan(0.05)
      expect(Math.abs(sample.rangeRateMps - reference.rangeRateMps[k]!)).toBeLessThan(0.01)
      expect(Math.sign(sample.dopplerRateHzPerS)).toBe(direction === 'downlink' ? -1 : 1)
    }
  })

  it('starts at AOS, steps evenly, and has culmination and LOS in their places, nothing twice', () => {
    const samples = samplePass(pass!, { ...options, direction: 'downlink', stepS: 37 })
    const times = samples.map(sample => sample.atMs)
    expect(times[0]).toBe(pass!.aosMs)
    expect(times.at(-1)).toBe(pass!.losMs)
    expect(times).toContain(pass!.culminationMs)
    const stepped = times.filter(t => t !== pass!.culminationMs && t !== pass!.losMs)
    stepped.forEach((t, k) => expect(t).toBeCloseTo(pass!.aosMs + k * 37_000, 3))
    expect(stepped).toHaveLength(Math.ceil((pass!.losMs - pass!.aosMs) / 37_000))
    for (let i = 1; i < times.length; i++) expect(times[i]! - times[i - 1]!).toBeGreaterThanOrEqual(0.5)
    expect(Math.max(...samples.map(s => s.elevationRad))).toBe(samples.find(s => s.atMs === pass!.culminationMs)!.elevationRad)
  })

  it('bears culmination or LOS in place of a step within half a millisecond of it', () => {
    const even = { ...pass!, culminationMs: pass!.aosMs + 100_000.2, losMs: pass!.aosMs + 200_000.2 }
    const times = samplePass(even, { ...options, direction: 'uplink', stepS: 50 }).map(sample => sample.atMs - pass!.aosMs)
    expect(times).toEqual([0, 50_000, 100_000.2, 150_000, 200_000.2].map(t => expect.closeTo(t, 2)))
  })

  it('has three samples when the step is longer than the pass, one instant each', () => {
    expect(samplePass(pass!, { ...options, direction: 'uplink', stepS: 1e5 })).toHaveLength(3)
    const cut = { ...pass!, culminationMs: pass!.aosMs }
    expect(samplePass(cut, { ...options, direction: 'uplink', stepS: 1e5 })).toHaveLength(2)
    expect(() => samplePass(pass!, { ...options, direction: 'uplink', stepS: 0 })).toThrow(/stepS/)
  })
})
