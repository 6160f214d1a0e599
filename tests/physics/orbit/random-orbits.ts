import fc from 'fast-check'
import type { MaskPoint, MeanElements, Site } from '../../../shared/physics/types'
import { RAD } from '../../support/reference-elements'

/** Orbits and stations at random, for properties that hold of all. Whole numbers are drawn, so that counterexamples shrink. */

export const START = Date.UTC(2026, 10, 30)

const between = (from: number, to: number) => fc.integer({ min: 0, max: 100_000 }).map(k => from + (to - from) * k / 100_000)

/** Heights of perigee and apogee, km; inclination and argument of perigee, degrees; drag; the epoch and the length of the window, hours. */
interface Kind {
  readonly perigee: readonly [number, number]
  readonly above: readonly [number, number]
  readonly inclination: readonly [number, number]
  readonly pericentre?: readonly [number, number]
  readonly bstar: readonly [number, number]
  readonly epochBefore: readonly [number, number]
  readonly window: number
}

/** Short of 180°, where SGP4 itself goes astray. */
const anyTilt = [0, 179] as const
const usual = { bstar: [0, 2e-4], epochBefore: [-2, 30] } as const

export const kinds = {
  'low': { ...usual, perigee: [200, 1500], above: [0, 200], inclination: anyTilt, window: 3 },
  'low and stretched': { ...usual, perigee: [250, 900], above: [500, 6000], inclination: anyTilt, window: 4 },
  'decaying': { perigee: [95, 180], above: [0, 250], inclination: anyTilt, bstar: [1e-4, 2e-2], epochBefore: [-1, 6], window: 5 },
  'middle': { ...usual, perigee: [1500, 12_000], above: [0, 3000], inclination: anyTilt, window: 4 },
  'half-day': { ...usual, perigee: [19_800, 20_400], above: [0, 400], inclination: [50, 65], window: 6 },
  'Molniya': { ...usual, perigee: [400, 1500], above: [38_300, 39_300], inclination: [62, 65], pericentre: [255, 290], window: 6 },
  'transfer': { ...usual, perigee: [180, 800], above: [30_000, 36_000], inclination: [0, 60], window: 6 },
  'geostationary': { ...usual, perigee: [35_700, 35_850], above: [0, 60], inclination: [0, 1], window: 6 },
  'far': { ...usual, perigee: [300, 8000], above: [50_000, 250_000], inclination: anyTilt, window: 6 },
} satisfies Record<string, Kind>

/** Perigees beneath any sky: good for nothing but the end of a set, since SGP4 fails there for seconds in each revolution. */
export const sinking: Kind = { perigee: [1, 30], above: [50, 900], inclination: anyTilt, bstar: [0, 1e-6], epochBefore: [-1, 8], window: 3 }

/** The same a little higher, from where a test lowers them until SGP4 only just fails. */
export const skimming: Kind = { ...sinking, perigee: [20, 60], above: [300, 900], bstar: [0, 0], epochBefore: [0, 0.2] }

/** km and km³/s² of WGS-72, as SGP4 has them. */
export const [EARTH_KM, GM] = [6378.135, 398_600.8]

export function orbits({ perigee, above, inclination, pericentre = [0, 360], bstar, epochBefore }: Kind): fc.Arbitrary<MeanElements> {
  return fc.record({
    perigeeKm: between(...perigee), aboveKm: between(...above), inclinationDeg: between(...inclination), raanDeg: between(0, 360),
    argPericenterDeg: between(...pericentre), meanAnomalyDeg: between(0, 360), bstar: between(...bstar), epochHoursBefore: between(...epochBefore),
  }).map(({ perigeeKm, aboveKm, epochHoursBefore, ...rest }) => {
    const axisKm = EARTH_KM + perigeeKm + aboveKm / 2
    return {
      ...rest,
      name: null, catalogueNumber: null, designator: null, classification: 'U', elementSetNumber: null, revolutionAtEpoch: null,
      epochUtcUs: (START - Math.round(3_600_000 * epochHoursBefore)) * 1000,
      meanMotionRevPerDay: Math.sqrt(GM / axisKm ** 3) * 86_400 / (2 * Math.PI),
      eccentricity: aboveKm / 2 / axisKm,
      meanMotionDot: 0, meanMotionDdot: 0,
    }
  })
}

/** A horizon with teeth: in turn low and high, with edges from a thousandth of a degree to some degrees wide. */
const teeth: fc.Arbitrary<readonly MaskPoint[]> = fc.record({
  firstDeg: between(0, 60),
  teeth: fc.array(fc.record({ lowDeg: between(0, 12), highDeg: between(2, 85), wideDeg: between(0.05, 15), edgeDeg: fc.constantFrom(0.001, 0.1, 2), gapDeg: between(0.05, 40) }), { minLength: 1, maxLength: 12 }),
}).map(({ firstDeg, teeth }) => {
  const points: MaskPoint[] = []
  let azimuthDeg = firstDeg
  for (const { lowDeg, highDeg, wideDeg, edgeDeg, gapDeg } of teeth) {
    for (const [step, elevationDeg] of [[gapDeg, lowDeg], [edgeDeg, highDeg], [wideDeg, highDeg], [edgeDeg, lowDeg]] as const) {
      azimuthDeg += step
      points.push({ azimuthRad: (azimuthDeg % 360) * RAD, elevationRad: elevationDeg * RAD })
    }
    if (azimuthDeg > firstDeg + 290) break
  }
  return points
})

export const stations: fc.Arbitrary<Site> = fc.record({
  latitudeDeg: fc.oneof(fc.constantFrom(90, -90, 0, 89.999), between(-1, 1).map(z => Math.asin(z) / RAD)),
  longitudeDeg: fc.oneof(fc.constantFrom(180, -180, 179.9999, -179.9999, 0), between(-180, 180)),
  heightM: between(-430, 5000),
  minElevationDeg: fc.oneof(fc.constantFrom(0, 5, 10), between(0, 70)),
  mask: fc.oneof(fc.constant([]), teeth),
}).map(({ latitudeDeg, longitudeDeg, heightM, minElevationDeg, mask }) => ({
  latitudeRad: latitudeDeg * RAD, longitudeRad: longitudeDeg * RAD, heightM, minElevationRad: minElevationDeg * RAD, mask,
}))
