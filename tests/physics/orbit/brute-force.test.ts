import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { findPasses } from '../../../shared/physics/orbit/passes'
import { createPropagator } from '../../../shared/physics/orbit/propagator'
import type { Ephemeris, Propagator, Span } from '../../../shared/physics/types'
import { RAD } from '../../support/reference-elements'
import type { Awkward } from './awkward-horizons'
import { grazedByElevation, grazedByMask, grazedByTurning } from './awkward-horizons'
import type { Seconds, Station } from './by-the-second'
import { everySecond, stationOf } from './by-the-second'
import { faultsOf } from './hold-against'
import { kinds, orbits, START, stations } from './random-orbits'

// Source: SGP4, sidereal time and ellipsoid of the package satellite.js, asked every second (by-the-second.ts).
// A failure names seed and path of its case, which `fc.assert` takes to run that one alone.
const SEED = 20261130
const ORBITS = 30
const STATIONS = 12

const draws = fc.record({
  from: fc.nat(), lasting: fc.nat(), pick: fc.nat(), offsetDeg: fc.constantFrom(0.01, 0.001), momentS: fc.constantFrom(4, 20, 60, 300),
  sort: fc.constantFrom('elevation', 'mask', 'mask', 'turning'),
})
type Draws = typeof draws extends fc.Arbitrary<infer T> ? T : never

/** How often what the property is about was met, so that it cannot hold for want of cases. */
const met = { pairs: 0, always: 0, never: 0, ended: 0, insidePass: 0, clipped: 0, split: 0, brief: 0, grazing: 0, grazingMask: 0, turning: 0 }

/** A window that opens inside a pass, where there is one, and closes inside one or anywhere. */
function windowInside({ sines, site }: Station, { startMs, count }: Seconds, { from, lasting }: Draws): Span | null {
  const up: number[] = []
  sines.forEach((sine, k) => sine > Math.sin(site.minElevationRad) && up.push(k))
  if (up.length === 0) return null
  const fromMs = startMs + 1000 * up[from % up.length]! + from % 1000
  const toMs = lasting % 2 ? startMs + 1000 * up[lasting % up.length]! + lasting % 997 : fromMs + 1 + lasting % 20_000_000
  return toMs > fromMs && toMs < startMs + 1000 * (count - 1) ? { fromMs, toMs } : null
}

/** Horizons of one sort that this spacecraft only just clears and only just does not. */
function awkward(station: Station, seconds: Seconds, { sort, pick, offsetDeg, momentS }: Draws): Awkward[] {
  const isMask = sort === 'mask' && station.site.mask.length > 0
  const made = sort === 'turning'
    ? [true, false].map(isGap => grazedByTurning(station, seconds, pick, momentS, isGap))
    : [offsetDeg * RAD, -offsetDeg * RAD].map(offset => (isMask ? grazedByMask : grazedByElevation)(station, seconds, pick, offset))
  const found = made.filter(one => one !== null)
  met[sort === 'turning' ? 'turning' : isMask ? 'grazingMask' : 'grazing'] += found.length
  return found
}

function hold(ephemeris: Ephemeris, station: Station, seconds: Seconds, window: Span, alsoMs: readonly number[] = []): void {
  const search = findPasses({ ephemeris, site: station.site, ...window, ut1MinusUtcS: 0 })
  expect(faultsOf({ search, window, station, seconds, alsoMs }), `over ${JSON.stringify({ site: station.site, window })}`).toEqual([])
  const { passes } = search
  met.always += search.alwaysVisible ? 1 : 0
  met.never += passes.length === 0 ? 1 : 0
  met.ended += search.endedBy ? 1 : 0
  met.clipped += passes.some(pass => pass.aosClipped || pass.losClipped) ? 1 : 0
  met.split += passes.some(pass => pass.workable.length > 1) ? 1 : 0
  met.brief += passes.some(pass => pass.workable.some(span => span.toMs - span.fromMs < 1000)) ? 1 : 0
}

function holdStation(propagator: Propagator, ephemeris: Ephemeris, station: Station, seconds: Seconds, window: Span, drawn: Draws): void {
  met.pairs++
  hold(ephemeris, station, seconds, window)
  const inside = windowInside(station, seconds, drawn)
  if (inside) {
    met.insidePass++
    hold(createEphemeris(propagator, inside.fromMs, inside.toMs), station, seconds, inside)
  }
  for (const { horizon, atMs } of awkward(station, seconds, drawn)) hold(ephemeris, station.under(horizon), seconds, window, [atMs])
}

describe('the pass finder against brute force', () => {
  it.each(Object.entries(kinds))('misses and invents no pass of %s orbits over any station, horizon or window', { timeout: 180_000 }, (name, kind) => {
    const window = { fromMs: START, toMs: START + kind.window * 3_600_000 }
    const sites = fc.array(fc.tuple(stations, draws), { minLength: STATIONS, maxLength: STATIONS })
    fc.assert(fc.property(orbits(kind), sites, (elements, drawn) => {
      const created = createPropagator(elements)
      fc.pre(created.ok)
      const seconds = everySecond(elements, START, kind.window * 3600, name === 'decaying')
      const ephemeris = createEphemeris(created.propagator, window.fromMs, window.toMs)
      for (const [site, more] of drawn) holdStation(created.propagator, ephemeris, stationOf(site, seconds), seconds, window, more)
    }), { seed: SEED, numRuns: ORBITS, endOnFailure: true })
  })

  it('meets all that it is meant to meet, over three thousand pairs and more', () => {
    const least = { pairs: 3000, always: 100, never: 500, ended: 100, insidePass: 400, clipped: 400, split: 200, brief: 100, grazing: 500, grazingMask: 200, turning: 100 }
    expect(Object.entries(least).filter(([what, times]) => met[what as keyof typeof met] < times), JSON.stringify(met)).toEqual([])
  })
})
