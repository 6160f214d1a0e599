import type { Direction, Hz, Propagator, UtcMs } from '../types'
import { derivativePerS } from './derivative'
import { neededOverCarrierMinusOne, receivedOverTransmitted, type Path, type StateAt } from './ratio'

/** A path and what is sent over it. */
export interface LinkPath extends Path {
  readonly direction: Direction
  readonly carrierHz: Hz
}

export interface NeededFrequency {
  /** Sky frequency to set at the station at its own instant of reception or transmission. */
  frequencyHz(utcMs: UtcMs): Hz
  /** `frequencyHz` minus the carrier, kept free of the carrier's rounding. */
  dopplerHz(utcMs: UtcMs): Hz
  /** Time derivative of both. */
  rateHzPerS(utcMs: UtcMs): number
}

/** A propagator as a function of states, null where it fails. */
export const statesOf = (propagator: Propagator): StateAt => (utcMs) => {
  const state = propagator.at(utcMs)
  return state.ok ? state : null
}

/**
 * Offset to tune at a station's instant, Hz: received minus carrier for a downlink, to transmit minus carrier for an uplink.
 *
 * @card Doppler offset: what to tune beside the carrier.
 * @formula f0·(ratio − 1) on a downlink, f0·(1/ratio − 1) on an uplink; first order −f0·ρ̇/c
 * @source special relativity
 * @units Hz, UTC ms of the station → Hz
 * @frame TEME axes
 * @range as the ratio; nominal, without the oscillator’s offset
 * @tolerance 0.05, 0.2, 0.5 Hz at 437.5, 2245, 8200 MHz (doppler/reference-doppler.test.ts)
 */
export const dopplerHz = (link: LinkPath, utcMs: UtcMs): Hz =>
  link.carrierHz * neededOverCarrierMinusOne(link, link.direction, utcMs)

/**
 * What to set at the station, sky frequency (before any converter), over time. Downlink: carrier · ratio, which falls
 * through a pass. Uplink: carrier / ratio, which rises. Nominal: without oscillator offset or trim.
 *
 * The rate is a fourth-order difference of the offset, noise and truncation below 1e-4 Hz/s at 437 MHz in low orbit.
 * Throws a RangeError outside the ephemeris.
 *
 * @card Needed frequency and its rate: sky frequency to set through a pass, and how fast it moves.
 * @formula f0 + Δf; rate (f(t−2h) − 8f(t−h) + 8f(t+h) − f(t+2h))/(12h), h = 0.25 s
 * @source special relativity; Abramowitz, Stegun, table 25.2
 * @units Hz, UTC ms → Hz, Hz/s
 * @frame TEME axes
 * @range within the ephemeris; before any converter
 * @tolerance 0.3 % of the closed forms of peak rate and shift (doppler/closed-forms.test.ts); noise 1e-3 Hz/s (doppler/rates.test.ts)
 */
export function createNeededFrequency(link: LinkPath): NeededFrequency {
  return {
    frequencyHz: utcMs => link.carrierHz + dopplerHz(link, utcMs),
    dopplerHz: utcMs => dopplerHz(link, utcMs),
    rateHzPerS: utcMs => derivativePerS(seconds => dopplerHz(link, utcMs + seconds * 1000)),
  }
}

/**
 * Scale of the symbol clock by the same ratio, parts per million: how much faster symbols arrive than they were sent.
 *
 * @card Symbol clock: how much faster symbols arrive than they were sent.
 * @formula (ratio − 1)·1e6
 * @source the symbol clock scales by the carrier’s ratio; common practice
 * @units dimensionless → ppm
 * @frame none
 * @range ratios near 1
 * @tolerance 1e-6 ppm (doppler/closed-forms.test.ts)
 */
export const symbolClockPpm = (ratio: number): number => (ratio - 1) * 1e6

/**
 * The symbol clock's scale on a path at a station's instant, ppm, without the cancellation in `ratio − 1`.
 *
 * @card Symbol clock on a path: the same at an instant, without loss of digits.
 * @formula (ratio − 1)·1e6
 * @source the symbol clock scales by the carrier’s ratio; common practice
 * @units UTC ms → ppm
 * @frame TEME axes
 * @range within the ephemeris
 * @tolerance 0.05 ppm of first order (doppler/closed-forms.test.ts)
 */
export const symbolClockPpmAt = (path: Path, direction: Direction, utcMs: UtcMs): number =>
  receivedOverTransmitted(path, direction, utcMs).ratioMinusOne * 1e6
