import type { BudgetModel, BudgetParts, Hz, RadioModel, UtcMs } from '../types'

/** How the needed frequency answers to each cause at one instant. Hz per second of time; signs do not matter. */
export interface Sensitivity {
  readonly utcMs: UtcMs
  readonly carrierHz: Hz
  /** ḟ, everything moving. */
  readonly rateHzPerS: number
  /** ∂f/∂t_along: the spacecraft moved along its orbit, the station staying. */
  readonly alongTrackHzPerS: number
  /** ∂f/∂UT1: the station turned with the Earth, the spacecraft staying. */
  readonly ut1HzPerS: number
}

/** The uncertain parts of the budget: all but `stepsHz`. */
export type UncertainParts = Omit<BudgetParts, 'stepsHz'>

/**
 * Error budget at one instant, Hz:
 * - timing, a limit: (station clock error + uncertainty of the command latency)·|ḟ|. The latency itself is no error.
 * - UT1, a limit: its bound·|∂f/∂UT1|.
 * - orbit, one sigma: σ along-track in seconds·|∂f/∂t_along|.
 * - oscillator, one sigma: f·√(L_spacecraft² + L_station²)/√3. Data sheets state limits; evenly spread within ±L is σ = L/√3
 *   (JCGM 100:2008, 4.3.7).
 *
 * @card Error budget: how far off each cause may put the needed frequency at an instant.
 * @formula timing (clock + latency’s uncertainty)·|ḟ|; UT1 bound·|∂f/∂UT1|; orbit σ_t·|∂f/∂t_along|; oscillator f·√(L_sc² + L_st²)/√3
 * @source mechanics; L/√3: JCGM 100:2008, 4.3.7
 * @units ms, s, ppm, Hz/s → Hz
 * @frame none
 * @range timing and UT1 are limits, orbit and oscillator one sigma
 * @tolerance 1e-9 Hz of values by hand (plan/budget.test.ts)
 */
export function budgetAt(at: Sensitivity, budget: BudgetModel, radio: Pick<RadioModel, 'latencyUncertaintyMs'>): UncertainParts {
  return {
    timingHz: (budget.clockErrorMs + radio.latencyUncertaintyMs) / 1000 * Math.abs(at.rateHzPerS),
    ut1Hz: budget.ut1BoundS * Math.abs(at.ut1HzPerS),
    orbitHz: budget.alongTrackSigmaS(at.utcMs) * Math.abs(at.alongTrackHzPerS),
    oscillatorHz: at.carrierHz * 1e-6 * Math.sqrt((budget.spacecraftPpm ** 2 + budget.stationPpm ** 2) / 3),
    trimHz: 0,
  }
}

/**
 * The sum of the budget over time, without its parts: what a planner asks at every knot. Hz; rates in Hz per second.
 *
 * @card Sum of the budget, at once: what the uncertain parts come to at an instant.
 * @formula timing·|ḟ| + UT1 bound·|∂f/∂UT1| + k·√((σ_t·∂f/∂t_along)² + oscillator²)
 * @source the cards of the budget and of its sum
 * @units ms, s, ppm, Hz/s → Hz
 * @frame none
 * @range k ≥ 0, 2 unless set
 * @tolerance 1e-9 Hz of the parts summed (plan/budget.test.ts)
 */
export function uncertaintyBy(carrierHz: Hz, budget: BudgetModel, radio: Pick<RadioModel, 'latencyUncertaintyMs'>): (utcMs: UtcMs, alongTrackHzPerS: number, ut1HzPerS: number) => Hz {
  const { alongTrackSigmaS, ut1BoundS, k } = budget
  const { timingHz: timingS, oscillatorHz } = budgetAt({ utcMs: NaN, carrierHz, rateHzPerS: 1, alongTrackHzPerS: 0, ut1HzPerS: 0 }, { ...budget, alongTrackSigmaS: () => 0 }, radio)
  return (utcMs, alongTrackHzPerS, ut1HzPerS) => {
    const orbitHz = alongTrackSigmaS(utcMs) * alongTrackHzPerS
    return timingS * Math.abs(alongTrackHzPerS + ut1HzPerS) + ut1BoundS * Math.abs(ut1HzPerS) + k * Math.sqrt(orbitHz * orbitHz + oscillatorHz * oscillatorHz)
  }
}

/**
 * Limits add; one-sigma spreads add as root of squares, times k. Hz.
 *
 * @card Sum of the budget: what the uncertain parts come to.
 * @formula timing + UT1 + k·√(orbit² + oscillator² + trim²)
 * @source common practice: limits add, spreads as the root of squares
 * @units Hz → Hz
 * @frame none
 * @range k ≥ 0, 2 unless set
 * @tolerance 1e-12 Hz of a value by hand (plan/budget.test.ts)
 */
export function uncertaintyHz(parts: UncertainParts, k: number): Hz {
  return parts.timingHz + parts.ut1Hz + k * Math.sqrt(parts.orbitHz ** 2 + parts.oscillatorHz ** 2 + parts.trimHz ** 2)
}
