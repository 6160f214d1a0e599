import { describe, expect, it } from 'vitest'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { findPasses } from '../../../shared/physics/orbit/passes'
import { createPropagator } from '../../../shared/physics/orbit/propagator'
import type { MeanElements, Site } from '../../../shared/physics/types'
import { clearanceByHand } from '../../support/elevation-by-hand'
import { RAD } from '../../support/reference-elements'

const START = Date.UTC(2026, 10, 30)
const WINDOW_MS = 12 * 3_600_000
const STEP_MS = 1_000
/** The check's own sidereal time is good to 1e-6 rad. */
const DOUBT_RAD = 5e-6

/** mulberry32, a generator in the public domain: a fixed seed, so that each run asks the same. */
function generator(seed: number): () => number {
  let state = seed
  return () => {
    state = (state + 0x6D2B79F5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

const kinds = {
  low: [13, 16.2, 0, 0.01],
  transfer: [2.1, 2.6, 0.7, 0.74],
  twelveHours: [1.9, 2.1, 0, 0.74],
  synchronous: [0.98, 1.02, 0, 0.01],
} as const

function randomElements(random: () => number, kind: keyof typeof kinds): MeanElements {
  const [slowest, fastest, roundest, longest] = kinds[kind]
  const between = (a: number, b: number): number => a + (b - a) * random()
  return {
    name: null, catalogueNumber: null, designator: null, classification: 'U', elementSetNumber: null, revolutionAtEpoch: null,
    epochUtcUs: Math.round((START - 3_600_000 * between(1, 60)) * 1000),
    meanMotionRevPerDay: between(slowest, fastest),
    eccentricity: between(roundest, longest),
    inclinationDeg: kind === 'synchronous' ? between(0, 20) : between(0, 179),
    raanDeg: between(0, 360),
    argPericenterDeg: between(0, 360),
    meanAnomalyDeg: between(0, 360),
    bstar: between(0, 2e-4),
    meanMotionDot: 0,
    meanMotionDdot: 0,
  }
}

const randomSite = (random: () => number, points: number): Site => ({
  latitudeRad: Math.asin(2 * random() - 1),
  longitudeRad: (2 * random() - 1) * Math.PI,
  heightM: 3000 * random(),
  minElevationRad: 25 * random() ** 2 * RAD,
  mask: Array.from({ length: points }, () => ({ azimuthRad: 2 * Math.PI * random(), elevationRad: 40 * random() ** 2 * RAD })),
})

describe('the pass finder against brute force', () => {
  const cases = (Object.keys(kinds) as (keyof typeof kinds)[]).flatMap(kind => [0, 1, 2, 3, 4, 5].map(i => [kind, i] as const))

  it.each(cases)('knows for each second of half a day whether a random %s orbit is workable (%i)', (kind, i) => {
    const random = generator(1000 * Object.keys(kinds).indexOf(kind) + i)
    const elements = randomElements(random, kind)
    const created = createPropagator(elements)
    if (!created.ok) throw new Error(`Choose another seed: ${created.error}`)
    const ephemeris = createEphemeris(created.propagator, START, START + WINDOW_MS)
    const endMs = ephemeris.endedBy ? ephemeris.toMs : START + WINDOW_MS
    for (const site of [randomSite(random, 0), randomSite(random, 1 + Math.floor(9 * random()))]) {
      const search = findPasses({ ephemeris, site, fromMs: START, toMs: START + WINDOW_MS, ut1MinusUtcS: 0 })
      const spans = search.passes.flatMap(pass => pass.workable)
      spans.forEach((span, k) => {
        expect(span.toMs).toBeGreaterThan(span.fromMs)
        if (k > 0) expect(span.fromMs).toBeGreaterThan(spans[k - 1]!.toMs)
      })
      let next = 0
      const wrong: number[] = []
      for (let t = START; t <= endMs; t += STEP_MS) {
        while (next < spans.length && spans[next]!.toMs < t) next++
        const workable = next < spans.length && spans[next]!.fromMs <= t
        const clearance = clearanceByHand(created.propagator, site, t, site.minElevationRad)
        if (Math.abs(clearance) > DOUBT_RAD && workable !== clearance > 0) wrong.push((t - START) / 1000)
      }
      expect(wrong, 'seconds from the start that the finder has wrong').toEqual([])
    }
  })
})
