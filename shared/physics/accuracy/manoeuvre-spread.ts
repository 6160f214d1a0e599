import type { UtcMs } from '../types'

/** A burn along the track of which the outcome is not known to more than this. */
export interface ManoeuvreSpread {
  readonly startMs: UtcMs
  /** One sigma of the change of speed, m/s. */
  readonly speedSigmaMps: number
}

/**
 * How far a burn whose change of speed is uncertain spreads the spacecraft along its orbit, m, one sigma: a change of
 * speed Δv raises the semi-major axis by 2a·Δv/v, which slows the mean motion by 3/2·Δa/a of it, so that it falls behind
 * by 3·Δv every second. Nothing before the burn.
 *
 * @card After a manoeuvre: how an uncertain burn spreads the spacecraft along its orbit.
 * @formula 3·σ_v·(t − start), from Δa = 2a·Δv/v and Δn = −3n·Δa/(2a)
 * @source mechanics, near-circular orbit
 * @units m/s, UTC ms → m, 1 σ
 * @frame along track
 * @range from the start of the burn on; low eccentricity
 * @tolerance 1 m a day of 2.592 km a day for 1 cm/s (accuracy/manoeuvre-spread.test.ts)
 */
export function manoeuvreSpreadM({ startMs, speedSigmaMps }: ManoeuvreSpread, utcMs: UtcMs): number {
  return 3 * speedSigmaMps * Math.max(0, utcMs - startMs) / 1000
}
