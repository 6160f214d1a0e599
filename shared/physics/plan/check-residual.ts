import type { BudgetModel, BudgetParts, Hz, LinkModel, RadioModel, UtcMs } from '../types'
import type { CheckCurve } from './check-curve'
import type { AppliedRow } from './check-rows'
import { skyAt } from './check-rows'

/** What one row leaves over what it serves of a part. */
export interface Residual {
  /** Needed minus set, signed. */
  readonly stepsHz: (utcMs: UtcMs) => Hz
  readonly rateHzPerS: (utcMs: UtcMs) => number
  readonly budgetedHz: (utcMs: UtcMs) => Hz
  readonly partsAt: (utcMs: UtcMs) => BudgetParts
}

export interface ResidualTask { readonly link: LinkModel, readonly radio: RadioModel, readonly budget: BudgetModel }

/**
 * Residual of a row on the checker's curve, its budget with it. Of the carrier itself where no row is in effect yet.
 *
 * @card Budgeted residual: what a row leaves at an instant, with what is uncertain about it.
 * @formula |f − g_i − s_i·(t − e_i)| + timing + UT1 + k·√(orbit² + oscillator²)
 * @source common practice: limits add, spreads as the root of squares
 * @units UTC ms → Hz
 * @frame sky frequency
 * @range while the row is in effect
 * @tolerance as the verdict’s (plan/check-table.test.ts)
 */
export function residualOf(curve: CheckCurve, row: AppliedRow | undefined, { budget, radio, link }: ResidualTask): Residual {
  const { alongTrackSigmaS, ut1BoundS, k } = budget
  const slope = row?.skySlopeHzPerS ?? 0
  const timingS = (budget.clockErrorMs + radio.latencyUncertaintyMs) / 1000
  // Oscillator figures are limits; a limit L spreads as L/√3. A coherent link has the station's alone, at both ends of the trip.
  const oscillatorHz = link.turnaround ? 0 : link.carrierHz * Math.sqrt((budget.spacecraftPpm ** 2 + budget.stationPpm ** 2) / 3) / 1e6

  const stepsHz = (utcMs: UtcMs): Hz => curve.offsetHz(utcMs) - (row ? skyAt(row, utcMs) - link.carrierHz : 0)
  const timingHz = (utcMs: UtcMs): Hz => timingS * Math.abs(curve.answerHzPerS(utcMs))
  const ut1Hz = (utcMs: UtcMs): Hz => ut1BoundS === 0 ? 0 : ut1BoundS * Math.abs(curve.ut1HzPerS(utcMs))
  const orbitHz = (utcMs: UtcMs): Hz => {
    const sigmaS = alongTrackSigmaS(utcMs)
    return sigmaS === 0 ? 0 : sigmaS * Math.abs(curve.alongTrackHzPerS(utcMs))
  }
  return {
    stepsHz,
    rateHzPerS: utcMs => curve.rateHzPerS(utcMs) - slope,
    budgetedHz: utcMs => Math.abs(stepsHz(utcMs)) + timingHz(utcMs) + ut1Hz(utcMs) + k * Math.sqrt(orbitHz(utcMs) ** 2 + oscillatorHz ** 2),
    partsAt: utcMs => ({ stepsHz: stepsHz(utcMs), timingHz: timingHz(utcMs), ut1Hz: ut1Hz(utcMs), orbitHz: orbitHz(utcMs), oscillatorHz, trimHz: 0 }),
  }
}
