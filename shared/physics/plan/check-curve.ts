import { neededOverCarrierMinusOne } from '../doppler/ratio'
import type { Hz, LinkModel, PropagationError, Propagator, Site, Span, StateTeme, UtcMs } from '../types'
import { seriesOf } from './check-series'

export interface CheckCurveQuery {
  readonly propagator: Propagator
  readonly site: Site
  readonly link: Pick<LinkModel, 'direction' | 'carrierHz'>
  readonly ut1MinusUtcS: number
  readonly span: Span
}

/** What the checker knows of the needed frequency over one workable part. */
export interface CheckCurve {
  /** Frequency to set minus carrier. */
  readonly offsetHz: (utcMs: UtcMs) => Hz
  readonly rateHzPerS: (utcMs: UtcMs) => number
  /** ∂f/∂UT1, signed: the station turned, the spacecraft staying. */
  readonly ut1HzPerS: (utcMs: UtcMs) => number
  /** ∂f/∂t_along, signed: the spacecraft moved along its orbit, the station staying. What ḟ has beside the station's turning. */
  readonly alongTrackHzPerS: (utcMs: UtcMs) => number
}

/**
 * Offset by direct propagation, Hz; the truth that the curve interpolates. Throws RangeError where the propagator fails.
 *
 * @card Checker’s offset: the needed offset on true propagation, one instant.
 * @formula f0·(ratio − 1) on a downlink, f0·(1/ratio − 1) on an uplink
 * @source special relativity
 * @units UTC ms → Hz
 * @frame TEME axes
 * @range as far as SGP4 answers
 * @tolerance 0.05, 0.2, 0.5 Hz at 437.5, 2245, 8200 MHz (plan/check-curve.test.ts)
 */
export function directOffsetHz({ propagator, site, link, ut1MinusUtcS }: Omit<CheckCurveQuery, 'span'>, utcMs: UtcMs): Hz {
  const now = propagator.at(utcMs)
  if (!now.ok) throw failed(now.error, utcMs)
  // A light time beyond the set's end is bridged from the state now.
  const stateAt = (at: UtcMs): StateTeme | null => {
    const state = at === utcMs ? now : propagator.at(at)
    return state.ok ? state : null
  }
  return link.carrierHz * neededOverCarrierMinusOne({ stateAt, site, ut1MinusUtcS }, link.direction, utcMs)
}

const failed = (error: PropagationError, utcMs: UtcMs) =>
  new RangeError(`The element set cannot be propagated to ${new Date(utcMs).toISOString()}: ${error}. Cut the table before that instant.`)

const UT1_STEP_S = 0.5

/**
 * The checker's own interpolation of the needed frequency, from its own propagations: Chebyshev series, within 1e-3 Hz plus
 * 1e-12 of the carrier of direct propagation. Panels begin at a 48th of the orbit's period and are halved until the series
 * dies out. The partials are made when first asked for.
 *
 * @card Checker’s curve: needed offset, rate and partials over a workable part, on its own interpolation.
 * @formula Chebyshev series on panels of a 48th of the period, halved until they die out; ∂f/∂t_along = ḟ − ∂f/∂UT1
 * @source Press et al., Numerical Recipes §5.8; mechanics
 * @units UTC ms → Hz, Hz/s
 * @frame TEME axes
 * @range within the part
 * @tolerance 1e-3 Hz and 1e-12 of the carrier of true propagation (plan/check-curve.test.ts)
 */
export function checkCurveOf(query: CheckCurveQuery): CheckCurve {
  const { propagator, link, ut1MinusUtcS, span } = query
  const panelMs = 86_400_000 / propagator.elements.meanMotionRevPerDay / 48
  const offset = seriesOf(utcMs => directOffsetHz(query, utcMs), {
    ...span, panelMs, nodes: 16, tolerance: 1e-4 + 1e-13 * link.carrierHz,
  })
  const makeUt1 = () => seriesOf((utcMs) => {
    // One propagation for both turns: what the light time adds over the state now is the same in both.
    const now = propagator.at(utcMs)
    if (!now.ok) throw failed(now.error, utcMs)
    const stateAt = (at: UtcMs): StateTeme | null => at === utcMs ? now : null
    const turned = (byS: number) => neededOverCarrierMinusOne({ stateAt, site: query.site, ut1MinusUtcS: ut1MinusUtcS + byS }, link.direction, utcMs)
    return link.carrierHz * (turned(UT1_STEP_S) - turned(-UT1_STEP_S)) / (2 * UT1_STEP_S)
  }, { ...span, panelMs, nodes: 12, tolerance: 1e-11 * link.carrierHz })
  let ut1: ReturnType<typeof makeUt1> | null = null
  const ut1At = (utcMs: UtcMs) => (ut1 ??= makeUt1()).valueAt(utcMs)
  // The parts of the budget ask for the same instant one after the other.
  const rateHzPerS = remembering(offset.rateAt)
  const ut1HzPerS = remembering(ut1At)
  return {
    offsetHz: remembering(offset.valueAt), rateHzPerS, ut1HzPerS,
    alongTrackHzPerS: utcMs => rateHzPerS(utcMs) - ut1HzPerS(utcMs),
  }
}

/** The function, with its latest answer kept. */
function remembering(fn: (utcMs: UtcMs) => number): (utcMs: UtcMs) => number {
  let lastMs = NaN
  let last = NaN
  return (utcMs) => {
    if (utcMs !== lastMs) {
      last = fn(utcMs)
      lastMs = utcMs
    }
    return last
  }
}
