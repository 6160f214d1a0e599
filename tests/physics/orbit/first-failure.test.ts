import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { createPropagator } from '../../../shared/physics/orbit/propagator'
import type { Ephemeris } from '../../../shared/physics/types'
import type { Seconds } from './by-the-second'
import { everySecond } from './by-the-second'
import { kinds, orbits, sinking, START } from './random-orbits'

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

  it('was met before the window, inside it, and where SGP4 is good again within ten minutes', () => {
    expect(Object.entries(met).filter(([, times]) => times < 20), JSON.stringify(met)).toEqual([])
  })
})
