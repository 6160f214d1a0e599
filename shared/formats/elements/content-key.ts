import type { MeanElements } from '../../physics/types'

/**
 * Text over what decides a prediction with SGP4: the object, the epoch to the microsecond and the seven numbers the
 * propagator reads. Names, designators, counters and the derivatives of mean motion, which SGP4 ignores, are left out.
 * Numbers stand in their shortest exact decimal form, so a TLE and an OMM of one set give one key.
 */
export function contentKey(e: MeanElements): string {
  return [
    'sgp4', e.catalogueNumber ?? '-', e.epochUtcUs, e.meanMotionRevPerDay, e.eccentricity, e.inclinationDeg,
    e.raanDeg, e.argPericenterDeg, e.meanAnomalyDeg, e.bstar,
  ].join('|')
}
