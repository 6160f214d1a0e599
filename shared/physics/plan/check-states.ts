import type { Propagation, PropagationError, Propagator, Span, StateTeme, UtcMs } from '../types'
import { seriesOf } from './check-series'

/** Light is on its way for less than this below the distance of the Moon's orbit. */
const LIGHT_MS = 1500
/** Panels to begin with, in shares of the orbit's period. */
const PANEL_SHARE = 1 / 8
const NODES = 10
/** What a state may miss by: between its points an instant in ms, as a double, is good to 2 mm along an orbit already. */
const POSITION_TOLERANCE_M = 5e-3
const VELOCITY_TOLERANCE_MPS = 2e-5
const TOLERANCES = [0, 1, 2, 3, 4, 5].map(k => k < 3 ? POSITION_TOLERANCE_M : VELOCITY_TOLERANCE_MPS)

/** The checker's own states over a part. */
export interface CheckStates {
  /** Null before and after the part and the light on its way there, and where the element set has ended by then. */
  readonly stateAt: (utcMs: UtcMs) => StateTeme | null
  /** The same as six numbers; false where there is none. */
  readonly stateInto: (utcMs: UtcMs, into: Float64Array) => boolean
}

/** Asks the propagator, or says where the element set ends. Throws RangeError there. */
export function propagated(propagator: Propagator, utcMs: UtcMs): Extract<Propagation, { ok: true }> {
  const state = propagator.at(utcMs)
  if (!state.ok) throw new RangeError(endedBy(state.error, utcMs))
  return state
}

const endedBy = (error: PropagationError, utcMs: UtcMs) =>
  `The element set cannot be propagated to ${new Date(utcMs).toISOString()}: ${error}. Cut the table before that instant.`

/**
 * States over a part by Chebyshev series through the checker's own propagations: place and velocity each by themselves, on panels
 * of an eighth of the orbit, halved until they die out. An orbit is smoother by far than the Doppler it makes, so a pass costs a
 * dozen propagations or two. The part is widened by what light needs, where the element set answers there. Throws RangeError where the
 * propagator fails within the part.
 *
 * @card Checker’s states: place and velocity over a workable part, on its own interpolation.
 * @formula Chebyshev series on panels of an eighth of the period, halved until they die out
 * @source Press et al., Numerical Recipes §5.8
 * @units UTC ms → m, m/s
 * @frame TEME
 * @range the part, and 1.5 s before and after where the element set answers
 * @tolerance 5 mm and 0.02 mm/s of true propagation (plan/check-states.test.ts)
 */
export function checkStatesOf(propagator: Propagator, span: Span): CheckStates {
  const widened = { fromMs: span.fromMs - LIGHT_MS, toMs: span.toMs + LIGHT_MS }
  try {
    return statesOver(propagator, widened)
  }
  catch (error) {
    if (!(error instanceof RangeError)) throw error
    return statesOver(propagator, span)
  }
}

function statesOver(propagator: Propagator, { fromMs, toMs }: Span): CheckStates {
  const sample = (utcMs: UtcMs, into: Float64Array): void => {
    const { positionM, velocityMps } = propagated(propagator, utcMs)
    for (let k = 0; k < 3; k++) {
      into[k] = positionM[k]!
      into[k + 3] = velocityMps[k]!
    }
  }
  const panelMs = 86_400_000 / propagator.elements.meanMotionRevPerDay * PANEL_SHARE
  const { valuesAt } = seriesOf(sample, { fromMs, toMs, panelMs, nodes: NODES, tolerances: TOLERANCES })
  const stateInto = (utcMs: UtcMs, into: Float64Array): boolean => {
    if (utcMs < fromMs || utcMs > toMs) return false
    valuesAt(utcMs, into)
    return true
  }
  const at = new Float64Array(6)
  return {
    stateInto,
    stateAt: utcMs => stateInto(utcMs, at) ? { positionM: [at[0]!, at[1]!, at[2]!], velocityMps: [at[3]!, at[4]!, at[5]!] } : null,
  }
}
