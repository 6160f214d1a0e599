import type { UtcMs } from '../types'
import { derivativePerS } from '../doppler/derivative'
import { dopplerHz, type LinkPath } from '../doppler/needed'

/**
 * |∂f/∂t_along|, Hz per second of along-track timing: the spacecraft moved along its orbit (its states taken a little
 * later or earlier, in axes that do not rotate), the station staying. Times a timing spread (s) it is the orbit's part of
 * the error budget. Smaller than the Doppler rate by the station's own rotation.
 */
export function partialAlongTrackHzPerS(link: LinkPath, utcMs: UtcMs): number {
  return Math.abs(derivativePerS(seconds =>
    dopplerHz({ ...link, stateAt: t => link.stateAt(t + seconds * 1000) }, utcMs)))
}

/** |∂f/∂UT1|, Hz per second of UT1: the station rotated with the Earth, the spacecraft not. */
export function partialUt1HzPerS(link: LinkPath, utcMs: UtcMs): number {
  return Math.abs(derivativePerS(seconds =>
    dopplerHz({ ...link, ut1MinusUtcS: link.ut1MinusUtcS + seconds }, utcMs)))
}
