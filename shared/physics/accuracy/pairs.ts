import { dot, minus, norm, type Triple } from '../orbit/vector'
import { createPropagator } from '../orbit/propagator'
import type { MeanElements, Span } from '../types'

const US_PER_DAY = 86_400e6
/** Pairs further apart say more of the atmosphere than of the sets. */
export const OLDEST_PAIR_DAYS = 14
/** Nearer epochs are one set issued again, which agrees with itself. */
const YOUNGEST_PAIR_DAYS = 1 / 1440
export const MOST_SETS = 100

/** How far one set, propagated to the epoch of a later one, is from it. */
export interface AgedError {
  readonly ageDays: number
  /** Along-track difference over speed, s; positive where the older set runs ahead. */
  readonly timingS: number
}

/**
 * Timing errors of a spacecraft's older sets as its later ones show them (pairwise differencing: Osweiler, Covariance
 * Estimation and Autocorrelation of NORAD Two-Line Element Sets, Air Force Institute of Technology, 2006):
 *
 *     x = (r_i(t_j) − r_j(t_j))·v_j / |v_j|²,  s, TEME, for every i before j, t_j the epoch of j
 *
 * The newest 100 sets and ages from a minute to 14 days. Pairs with any part of a manoeuvre between their epochs are
 * left out, and so are sets with which SGP4 fails. In no order that matters.
 *
 * @card Pairs of sets: how far an older set, carried to the epoch of a later one, is early or late.
 * @formula x = (r_i(t_j) − r_j(t_j))·v_j/|v_j|²
 * @source Osweiler 2006, pairwise differencing
 * @units element sets → s, days
 * @frame TEME
 * @range ages of a minute to 14 days, the newest 100 sets; none across a manoeuvre
 * @tolerance 0.5 ms of a stated error (accuracy/learned.test.ts)
 */
export function agedErrors(sets: readonly MeanElements[], manoeuvres: readonly Span[] = []): AgedError[] {
  const usable = [...sets].sort((a, b) => b.epochUtcUs - a.epochUtcUs).slice(0, MOST_SETS).reverse()
    .flatMap((elements) => {
      const made = createPropagator(elements)
      const atEpoch = made.ok ? made.propagator.atMinutes(0) : null
      return made.ok && atEpoch?.ok ? [{ epochUs: elements.epochUtcUs, propagator: made.propagator, atEpoch }] : []
    })
  const errors: AgedError[] = []
  usable.forEach((later, j) => {
    const velocity = later.atEpoch.velocityMps as Triple
    const speed = norm(velocity)
    for (let i = j - 1; i >= 0; i--) {
      const earlier = usable[i]!
      const ageDays = (later.epochUs - earlier.epochUs) / US_PER_DAY
      if (ageDays > OLDEST_PAIR_DAYS) break
      if (ageDays < YOUNGEST_PAIR_DAYS || isManoeuvred(earlier.epochUs / 1000, later.epochUs / 1000, manoeuvres)) continue
      const state = earlier.propagator.atMinutes(ageDays * 1440)
      if (!state.ok) continue
      const apart = minus(state.positionM as Triple, later.atEpoch.positionM as Triple)
      errors.push({ ageDays, timingS: dot(apart, velocity) / speed ** 2 })
    }
  })
  return errors
}

const isManoeuvred = (fromMs: number, toMs: number, manoeuvres: readonly Span[]): boolean =>
  manoeuvres.some(span => span.fromMs <= toMs && span.toMs >= fromMs)
