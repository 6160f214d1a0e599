import type { MeanElements, Site } from '../../shared/physics/types'

const columns = (line: string, first: number, last: number): string => line.slice(first - 1, last)

/** "±NNNNN±E" with an assumed point in front of the digits. */
function assumedPoint(text: string): number {
  const match = /^\s*([+-]?)\s*(\d+)([+-]\d)\s*$/.exec(text)
  if (!match) throw new Error(`Not a field with an assumed decimal point: "${text}"`)
  return Number(`${match[1]}0.${match[2]}e${match[3]}`)
}

/**
 * Elements of the reference data's two lines by their published columns, for tests only: trusting, without checksum.
 * The epoch's eighth decimal of a day is 864 µs, so whole microseconds are exact.
 */
export function elementsFromLines(line1: string, line2: string): MeanElements {
  const shortYear = Number(columns(line1, 19, 20))
  const year = shortYear < 57 ? 2000 + shortYear : 1900 + shortYear
  const [wholeDays, fraction] = columns(line1, 21, 32).trim().split('.') as [string, string]
  const epochUtcUs = Date.UTC(year, 0, 1) * 1000 + (Number(wholeDays) - 1) * 86_400_000_000 + Number(fraction.padEnd(8, '0')) * 864
  return {
    name: null,
    catalogueNumber: columns(line1, 3, 7).trim(),
    designator: columns(line1, 10, 17).trim() || null,
    epochUtcUs,
    meanMotionRevPerDay: Number(columns(line2, 53, 63)),
    eccentricity: Number(`0.${columns(line2, 27, 33).replaceAll(' ', '0')}`),
    inclinationDeg: Number(columns(line2, 9, 16)),
    raanDeg: Number(columns(line2, 18, 25)),
    argPericenterDeg: Number(columns(line2, 35, 42)),
    meanAnomalyDeg: Number(columns(line2, 44, 51)),
    bstar: assumedPoint(columns(line1, 54, 61)),
    meanMotionDot: Number(columns(line1, 34, 43).replace(' ', '')),
    meanMotionDdot: assumedPoint(columns(line1, 45, 52)),
    classification: columns(line1, 8, 8),
    elementSetNumber: Number(columns(line1, 65, 68)),
    revolutionAtEpoch: Number(columns(line2, 64, 68)),
  }
}

export const RAD = Math.PI / 180

/** A site from degrees and metres. */
export const siteFromDegrees = (
  place: { latitudeDeg: number, longitudeDeg: number, heightM: number }, minElevationDeg = 0, maskDeg: readonly (readonly [number, number])[] = [],
): Site => ({
  latitudeRad: place.latitudeDeg * RAD,
  longitudeRad: place.longitudeDeg * RAD,
  heightM: place.heightM,
  minElevationRad: minElevationDeg * RAD,
  mask: maskDeg.map(([azimuth, elevation]) => ({ azimuthRad: azimuth * RAD, elevationRad: elevation * RAD })),
})
