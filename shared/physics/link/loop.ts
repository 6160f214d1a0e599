import { positive } from './positive'

/** A second-order phase-locked loop, as a modem's data sheet states it. */
export interface TrackingLoop {
  /** One-sided noise bandwidth B_L, Hz. */
  readonly noiseBandwidthHz: number
  /** ζ; 0.707 where nothing is stated. */
  readonly damping: number
}

/**
 * Natural frequency of a second-order loop with active filter, rad/s: ω_n = 2·B_L/(ζ + 1/(4ζ)), B_L one-sided, Hz. Source:
 * Gardner, Phaselock Techniques (from memory).
 * @throws RangeError unless both figures are above 0
 *
 * @card Loop’s natural frequency: how fast a phase-locked loop of a stated noise bandwidth is.
 * @formula ω_n = 2·B_L/(ζ + 1/(4ζ))
 * @source loop theory: Gardner, Phaselock Techniques, second-order loop with active filter (from memory)
 * @units Hz one-sided, damping → rad/s
 * @frame none
 * @range B_L, ζ above 0
 * @tolerance 1e-6 of its noise bandwidth by integration (link/loop.test.ts)
 */
export function loopNaturalRadPerS({ noiseBandwidthHz, damping }: TrackingLoop): number {
  positive('noiseBandwidthHz', noiseBandwidthHz)
  positive('damping', damping)
  return 2 * noiseBandwidthHz / (damping + 1 / (4 * damping))
}

/**
 * Steady phase error of a second-order loop while the carrier drifts, rad: 2π·ḟ/ω_n². Linear theory: a loop that is asked for
 * anything near a right angle slips.
 * @throws RangeError unless the loop's figures are above 0
 *
 * @card Loop’s phase error: how far a phase-locked loop lags behind a drifting carrier.
 * @formula 2π·ḟ/ω_n²
 * @source loop theory: acceleration error of a second-order loop
 * @units Hz/s → rad
 * @frame none
 * @range steady state, linear: errors well below a right angle
 * @tolerance 0.1 % of the loop followed in time; 40.3° and 6.45° (link/loop.test.ts)
 */
export function loopPhaseErrorRad(loop: TrackingLoop, driftHzPerS: number): number {
  return 2 * Math.PI * driftHzPerS / loopNaturalRadPerS(loop) ** 2
}

/**
 * The largest drift that a second-order loop follows within a permitted phase error, Hz/s: a link's drift limit where the data
 * sheet states a loop instead of one. `loopPhaseErrorRad` the other way round.
 * @throws RangeError unless the permitted error is above 0 and below a right angle, where the detector no longer pulls
 *
 * @card Loop’s drift limit: the fastest drift that a phase-locked loop follows within a permitted phase error.
 * @formula ḟ = φ·ω_n²/2π
 * @source loop theory: acceleration error of a second-order loop
 * @units rad → Hz/s
 * @frame none
 * @range 0 < φ < π/2, steady state
 * @tolerance 1e-12 of the phase error’s inverse; 159.3 Hz/s for 40.3° at 20 Hz (link/loop.test.ts)
 */
export function loopDriftLimitHzPerS(loop: TrackingLoop, permittedPhaseRad: number): number {
  if (!(permittedPhaseRad > 0 && permittedPhaseRad < Math.PI / 2)) {
    throw new RangeError(`permittedPhaseRad must lie between 0 and π/2, it is ${permittedPhaseRad}: permit a phase error below 90°`)
  }
  return permittedPhaseRad * loopNaturalRadPerS(loop) ** 2 / (2 * Math.PI)
}
