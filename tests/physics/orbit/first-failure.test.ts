import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { createPropagator } from '../../../shared/physics/orbit/propagator'
import type { Ephemeris, MeanElements } from '../../../shared/physics/types'
import type { Seconds } from './by-the-second'
import { everySecond } from './by-the-second'
import { EARTH_KM, kinds, orbits, sinking, skimming, START } from './random-orbits'

const HOURS = 3
const window = { fromMs: START, toMs: START + HOURS * 3_600_000 }
const met = { before: 0, inside: 0, passing: 0 }

/** What is wrong with where an ephemeris ends, in words; null where nothing is. */
function faultOf({ endedBy, toMs }: Ephemeris, { failsMs, at }: Seconds): string | null {
  const isGood = (_: unknown, k: number): boolean => at(failsMs + 10_000 * (k + 1)) !== null
  met.passing += failsMs <= window.toMs && Array.from({ length: 60 }).some(isGood) ? 1 : 0
  if (failsMs < START) {
    met.before++
    return endedBy !== null && toMs === START ? null : `failed ${(START - failsMs) / 1000} s before the window, used until ${(toMs - START) / 1000} s`
  }
  if (failsMs <= window.toMs) {
    met.inside++
    if (endedBy === null || toMs > failsMs) return `fails at ${(failsMs - START) / 1000} s, used until ${(toMs - START) / 1000} s`
  }
  const isEarly = endedBy !== null && toMs < failsMs - 1000
  return isEarly && toMs > START && at(toMs + 1) !== null ? `ends at ${(toMs - START) / 1000} s without an error` : null
}

/** Elements whose perigees over the window come as many metres below what SGP4 calls the ground. */
function lowered(elements: MeanElements, metres: number): MeanElements {
  const { km, count } = everySecond(elements, START, HOURS * 3600, false)
  const lowestKm = Array.from({ length: count }, (_, k) => Math.hypot(...km.subarray(3 * k, 3 * k + 3))).reduce((least, r) => Math.min(least, r))
  const axisShare = (EARTH_KM - metres / 1000 - lowestKm) / EARTH_KM
  return { ...elements, meanMotionRevPerDay: elements.meanMotionRevPerDay * (1 + axisShare) ** -1.5 }
}

describe('the first failure of a set', () => {
  // Source: SGP4 of the package satellite.js, asked every second from the epoch on.
  it.each([['decaying', kinds.decaying], ['sinking', sinking]])('ends it for good, be it for seconds at a perigee or before the window: %s orbits', (_, kind) => {
    fc.assert(fc.property(orbits(kind), (elements) => {
      const created = createPropagator(elements)
      fc.pre(created.ok)
      const ephemeris = createEphemeris(created.propagator, window.fromMs, window.toMs)
      expect(faultOf(ephemeris, everySecond(elements, START, HOURS * 3600, true))).toBeNull()
    }), { seed: 4, numRuns: 150, endOnFailure: true })
  })

  it('ends it where it lasts less than a minute, a few metres deep, and in every window after that', () => {
    let brief = 0
    fc.assert(fc.property(orbits(skimming), fc.integer({ min: 2, max: 30 }), (elements, metres) => {
      const sunk = lowered(elements, metres)
      const created = createPropagator(sunk)
      fc.pre(created.ok)
      const seconds = everySecond(sunk, START, HOURS * 3600, true)
      expect(faultOf(createEphemeris(created.propagator, window.fromMs, window.toMs), seconds)).toBeNull()
      if (seconds.failsMs > window.toMs) return
      brief += seconds.at(seconds.failsMs + 58_000) === null ? 0 : 1
      const laterMs = seconds.failsMs + 1_500_000
      expect(createEphemeris(created.propagator, laterMs, laterMs + 60_000)).toMatchObject({ endedBy: 'decayed', toMs: laterMs })
    }), { seed: 5, numRuns: 60, endOnFailure: true })
    expect(brief).toBeGreaterThan(20)
  })

  it('was met before the window, inside it, and where SGP4 is good again within ten minutes', () => {
    expect(Object.entries(met).filter(([, times]) => times < 20), JSON.stringify(met)).toEqual([])
  })
})
