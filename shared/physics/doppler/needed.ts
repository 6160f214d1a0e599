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

/** Offset to tune at a station's instant, Hz: received minus carrier for a downlink, to transmit minus carrier for an uplink. */
export const dopplerHz = (link: LinkPath, utcMs: UtcMs): Hz =>
  link.carrierHz * neededOverCarrierMinusOne(link, link.direction, utcMs)

/**
 * What to set at the station, sky frequency (before any converter), over time. Downlink: carrier · ratio, which falls
 * through a pass. Uplink: carrier / ratio, which rises. Nominal: without oscillator offset or trim.
 *
 * The rate is a fourth-order difference of the offset, noise and truncation below 1e-4 Hz/s at 437 MHz in low orbit.
 * Throws a RangeError outside the ephemeris.
 */
export function createNeededFrequency(link: LinkPath): NeededFrequency {
  return {
    frequencyHz: utcMs => link.carrierHz + dopplerHz(link, utcMs),
    dopplerHz: utcMs => dopplerHz(link, utcMs),
    rateHzPerS: utcMs => derivativePerS(seconds => dopplerHz(link, utcMs + seconds * 1000)),
  }
}

/** Scale of the symbol clock by the same ratio, parts per million: how much faster symbols arrive than they were sent. */
export const symbolClockPpm = (ratio: number): number => (ratio - 1) * 1e6

/** The symbol clock's scale on a path at a station's instant, ppm, without the cancellation in `ratio − 1`. */
export const symbolClockPpmAt = (path: Path, direction: Direction, utcMs: UtcMs): number =>
  receivedOverTransmitted(path, direction, utcMs).ratioMinusOne * 1e6
