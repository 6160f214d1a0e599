import type { UtcMs } from '../types'
import { derivativePerS } from '../doppler/derivative'
import { dopplerHz, type LinkPath } from '../doppler/needed'

/**
 * |∂f/∂t_along|, Hz per second of along-track timing: the spacecraft moved along its orbit (its states taken a little
 * later or earlier, in axes that do not rotate), the station staying. Times a timing spread (s) it is the orbit's part of
 * the error budget. Smaller than the Doppler rate by the station's own rotation.
 *
 * @card Answer to timing: how the needed frequency changes when the spacecraft is early or late on its orbit.
 * @formula |∂f/∂t_along|, spacecraft moved, station staying, by five-point difference
 * @source mechanics
 * @units Hz, UTC ms → Hz/s
 * @frame TEME axes
 * @range within the ephemeris
 * @tolerance 0.1 % of n/(n − ω) of the rate on an equatorial orbit (doppler/rates.test.ts)
 */
export function partialAlongTrackHzPerS(link: LinkPath, utcMs: UtcMs): number {
  return Math.abs(derivativePerS(seconds =>
    dopplerHz({ ...link, stateAt: t => link.stateAt(t + seconds * 1000) }, utcMs)))
}

/**
 * |∂f/∂UT1|, Hz per second of UT1: the station rotated with the Earth, the spacecraft not.
 *
 * @card Answer to UT1: how the needed frequency changes when the Earth has turned further.
 * @formula |∂f/∂UT1|, station turned, spacecraft staying, by five-point difference
 * @source mechanics
 * @units Hz, UTC ms → Hz/s
 * @frame TEME axes
 * @range within the ephemeris
 * @tolerance 0.1 % of ω/(n − ω) of the rate on an equatorial orbit (doppler/rates.test.ts)
 */
export function partialUt1HzPerS(link: LinkPath, utcMs: UtcMs): number {
  return Math.abs(derivativePerS(seconds =>
    dopplerHz({ ...link, ut1MinusUtcS: link.ut1MinusUtcS + seconds }, utcMs)))
}
