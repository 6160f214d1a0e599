import type { BudgetModel, LinkModel, MeanElements, RadioModel, Site } from '#shared/physics/types'

/** mulberry32, a generator in the public domain: a fixed seed, so that each run computes the same. */
export function generator(seed: number): () => number {
  let state = seed
  return () => {
    state = (state + 0x6D2B79F5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

export const FROM_MS = Date.UTC(2026, 11, 1)
const RAD = Math.PI / 180

/** Invented spacecraft in low orbits from 400 to 800 km, at all inclinations that small satellites fly at. */
export function fleetOf(count: number): MeanElements[] {
  const random = generator(20)
  const between = (a: number, b: number): number => a + (b - a) * random()
  return Array.from({ length: count }, (_, i) => ({
    name: `BENCH ${i + 1}`, catalogueNumber: null, designator: null, classification: 'U', elementSetNumber: null, revolutionAtEpoch: null,
    epochUtcUs: Math.round((FROM_MS - 3_600_000 * between(2, 30)) * 1000),
    meanMotionRevPerDay: between(14.3, 15.5),
    eccentricity: between(0.0001, 0.004),
    inclinationDeg: random() < 0.6 ? between(97, 98.6) : between(40, 75),
    raanDeg: between(0, 360), argPericenterDeg: between(0, 360), meanAnomalyDeg: between(0, 360),
    bstar: between(1e-5, 2e-4), meanMotionDot: 0, meanMotionDdot: 0,
  }))
}

/** Invented stations, from the equator to 78° north and 72° south. */
export function stationsOf(count: number): Site[] {
  const random = generator(300)
  return Array.from({ length: count }, (_, i) => ({
    latitudeRad: (-72 + 150 * (i + 0.5) / count) * RAD,
    longitudeRad: (2 * random() - 1) * Math.PI,
    heightM: 1500 * random(),
    minElevationRad: 5 * RAD,
    mask: [],
  }))
}

export const link: LinkModel = {
  direction: 'downlink', carrierHz: 437.5e6, symbolRateHz: 9600, detector: 'quadrature', permittedLossDb: 0.5,
  captureRangeHz: null, filterBandwidthHz: null, rolloff: null, driftLimitHzPerS: null, jumpLimitHz: null, limitHz: null,
  errorRate: 1e-5, esN0Db: 20, bandwidthHz: null, spreadingFactor: null, bandLowHz: null, bandHighHz: null,
}
export const radio: RadioModel = { stepHz: 10, offsetHz: 0, minDwellS: 1, latencyMs: 200, latencyUncertaintyMs: 20 }
export const budget: BudgetModel = {
  clockErrorMs: 10, ut1MinusUtcS: 0.05, ut1BoundS: 0.05, alongTrackSigmaS: () => 0.1, spacecraftPpm: 0.3, stationPpm: 0.05, k: 2,
}
