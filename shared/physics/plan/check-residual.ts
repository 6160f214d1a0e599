import type { BudgetModel, BudgetParts, Hz, LinkModel, RadioModel, UtcMs } from '../types'
import type { CheckCurve } from './check-curve'
import { AT } from './check-curve'
import type { Echo } from './check-echo'
import type { AppliedRow } from './check-rows'

/** Extremes over all instants at which a budgeted residual has been asked. */
export interface SeenExtremes {
  worstHz: Hz
  worstMs: UtcMs
  leastStepsHz: Hz
  mostStepsHz: Hz
  leastOffsetHz: Hz
  mostOffsetHz: Hz
}

/** What one row leaves over what it serves of a part. */
export interface Residual {
  /** Needed minus set, per second. */
  readonly rateHzPerS: (utcMs: UtcMs) => number
  readonly budgetedHz: (utcMs: UtcMs) => Hz
  readonly partsAt: (utcMs: UtcMs) => BudgetParts
  readonly seen: Readonly<SeenExtremes>
}

export interface ResidualTask { readonly link: LinkModel, readonly radio: RadioModel, readonly budget: BudgetModel }

/**
 * Residual of a row on the checker's curve, its budget with it. Of the carrier itself where no row is in effect yet. What comes back
 * of an uplink's own steps counts among the steps.
 *
 * @card Budgeted residual: what a row leaves at an instant, with what is uncertain about it.
 * @formula |f + returned steps − g_i − s_i·(t − e_i)| + timing + UT1 + k·√(orbit² + oscillator²)
 * @source common practice: limits add, spreads as the root of squares
 * @units UTC ms → Hz
 * @frame sky frequency
 * @range while the row is in effect
 * @tolerance as the verdict’s (plan/check-table.test.ts)
 */
export function residualOf(curve: CheckCurve, row: AppliedRow | undefined, { budget, radio, link }: ResidualTask, returned: Echo['steps'] = null): Residual {
  const { alongTrackSigmaS, ut1BoundS, k } = budget
  const { carrierHz } = link
  const timingS = (budget.clockErrorMs + radio.latencyUncertaintyMs) / 1000
  // Oscillator figures are limits; a limit L spreads as L/√3. A coherent link has the station's alone, at both ends of the trip.
  const oscillatorHz = link.turnaround ? 0 : carrierHz * Math.sqrt((budget.spacecraftPpm ** 2 + budget.stationPpm ** 2) / 3) / 1e6
  const setHz = row ? row.skyHz - carrierHz : 0
  const slope = row?.skySlopeHzPerS ?? 0
  const fromMs = row?.effectMs ?? 0
  const seen: SeenExtremes = {
    worstHz: -Infinity, worstMs: NaN, leastStepsHz: Infinity, mostStepsHz: -Infinity, leastOffsetHz: Infinity, mostOffsetHz: -Infinity,
  }

  const budgetedHz = (utcMs: UtcMs): Hz => {
    const at = curve.lookAt(utcMs)
    const offsetHz = at[AT.offsetHz]!
    const stepsHz = offsetHz + (returned ? returned.hz(utcMs) : 0) - setHz - slope * (utcMs - fromMs) / 1000
    const orbitHz = alongTrackSigmaS(utcMs) * (at[AT.answerHzPerS]! - at[AT.ut1HzPerS]!)
    const limitsHz = timingS * Math.abs(at[AT.answerHzPerS]!) + ut1BoundS * Math.abs(at[AT.ut1HzPerS]!)
    const residualHz = Math.abs(stepsHz) + limitsHz + k * Math.sqrt(orbitHz * orbitHz + oscillatorHz * oscillatorHz)
    if (residualHz > seen.worstHz) {
      seen.worstHz = residualHz
      seen.worstMs = utcMs
    }
    if (stepsHz < seen.leastStepsHz) seen.leastStepsHz = stepsHz
    if (stepsHz > seen.mostStepsHz) seen.mostStepsHz = stepsHz
    if (offsetHz < seen.leastOffsetHz) seen.leastOffsetHz = offsetHz
    if (offsetHz > seen.mostOffsetHz) seen.mostOffsetHz = offsetHz
    return residualHz
  }
  return {
    seen, budgetedHz,
    rateHzPerS: utcMs => curve.lookAt(utcMs)[AT.rateHzPerS]! + (returned ? returned.hzPerS(utcMs) : 0) - slope,
    partsAt: (utcMs) => {
      const { offsetHz, answerHzPerS, ut1HzPerS, alongTrackHzPerS } = curve
      return {
        stepsHz: offsetHz(utcMs) + (returned ? returned.hz(utcMs) : 0) - setHz - slope * (utcMs - fromMs) / 1000,
        timingHz: timingS * Math.abs(answerHzPerS(utcMs)),
        ut1Hz: ut1BoundS * Math.abs(ut1HzPerS(utcMs)),
        orbitHz: alongTrackSigmaS(utcMs) * Math.abs(alongTrackHzPerS(utcMs)),
        oscillatorHz, trimHz: 0,
      }
    },
  }
}
