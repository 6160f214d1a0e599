import { dopplerHz } from '../doppler/needed'
import { SPEED_OF_LIGHT_MPS } from '../doppler/ratio'
import { answeringLink } from '../doppler/two-way'
import { EARTH_ROTATION_RAD_PER_S, siteStateTeme } from '../orbit/frames'
import type { Hz, LinkModel, Propagator, Site, Span, StateTeme, UtcMs } from '../types'
import type { Sampler } from './check-series'
import { seriesOf } from './check-series'
import { checkStatesOf, propagated } from './check-states'

export interface CheckCurveQuery {
  readonly propagator: Propagator
  readonly site: Site
  readonly link: Pick<LinkModel, 'direction' | 'carrierHz' | 'turnaround'>
  readonly ut1MinusUtcS: number
  readonly span: Span
}

/** What the checker knows of the needed frequency over one workable part. */
export interface CheckCurve {
  readonly span: Span
  /** The states it is made of; null outside the span, but for light on its way. */
  readonly stateAt: (utcMs: UtcMs) => StateTeme | null
  /** Frequency to set minus carrier. */
  readonly offsetHz: (utcMs: UtcMs) => Hz
  readonly rateHzPerS: (utcMs: UtcMs) => number
  /** What an error of timing moves the need by: `rateHzPerS`, but of both legs where a coherent link's uplink is pre-compensated. */
  readonly answerHzPerS: (utcMs: UtcMs) => number
  /** ∂f/∂UT1, signed: the station turned, the spacecraft staying. */
  readonly ut1HzPerS: (utcMs: UtcMs) => number
  /** ∂f/∂t_along, signed: the spacecraft moved along its orbit, the station staying. What ḟ has beside the station's turning. */
  readonly alongTrackHzPerS: (utcMs: UtcMs) => number
  /** All of these at once, by `AT`; overwritten when another instant is asked. */
  readonly lookAt: (utcMs: UtcMs) => Float64Array
}

/** Where each figure of a look stands. */
export const AT = { offsetHz: 0, ut1HzPerS: 1, rateHzPerS: 2, answerHzPerS: 3 } as const

/**
 * Offset by direct propagation, Hz; the truth that the curve interpolates. Throws RangeError where the propagator fails.
 *
 * @card Checker’s offset: the needed offset on true propagation, one instant.
 * @formula f0·(ratio − 1) on a downlink, f0·(1/ratio − 1) on an uplink; on a coherent link its own
 * @source special relativity
 * @units UTC ms → Hz
 * @frame TEME axes
 * @range as far as SGP4 answers
 * @tolerance 0.05, 0.2, 0.5 Hz at 437.5, 2245, 8200 MHz (plan/check-curve.test.ts)
 */
export function directOffsetHz({ propagator, site, link, ut1MinusUtcS }: Omit<CheckCurveQuery, 'span'>, utcMs: UtcMs): Hz {
  const now = propagated(propagator, utcMs)
  // A light time beyond the set's end is bridged from the state now.
  const stateAt = (at: UtcMs): StateTeme | null => {
    const state = at === utcMs ? now : propagator.at(at)
    return state.ok ? state : null
  }
  return dopplerHz({ ...link, stateAt, site, ut1MinusUtcS }, utcMs)
}

/**
 * ∂ρ̇/∂UT1, m/s per second: the station s turned on with the Earth, its velocity u = ω×s, the spacecraft staying. With d the line
 * from station to spacecraft and w the spacecraft's velocity against the station's: ρ̇ = d·w/ρ, ∂d = −u, ∂w = −ω×u.
 */
function rangeRateByUt1({ positionM: r, velocityMps: v }: StateTeme, site: Site, utcMs: UtcMs, ut1MinusUtcS: number): number {
  const { positionM: s, velocityMps: u } = siteStateTeme(site, utcMs, ut1MinusUtcS)
  const dx = r[0] - s[0]
  const dy = r[1] - s[1]
  const dz = r[2] - s[2]
  const wx = v[0] - u[0]
  const wy = v[1] - u[1]
  const range2 = dx * dx + dy * dy + dz * dz
  const alongU = dx * u[0] + dy * u[1]
  const closing = dx * wx + dy * wy + dz * v[2]
  const turning = EARTH_ROTATION_RAD_PER_S ** 2 * (dx * s[0] + dy * s[1]) - u[0] * wx - u[1] * wy
  return (turning + closing * alongU / range2) / Math.sqrt(range2)
}

/** Panels to begin with, in shares of the orbit's period. */
const PANEL_SHARE = 1 / 24
const NODES = 14

/**
 * The checker's own interpolation of the needed frequency, from its own propagations: Chebyshev series, within 1e-3 Hz plus
 * 1e-12 of the carrier of direct propagation. Panels begin at a 24th of the orbit's period and are halved until the series
 * dies out. ∂f/∂UT1 is of first order in v/c, a part in 10⁴.
 *
 * @card Checker’s curve: needed offset, rate and partials over a workable part, on its own interpolation.
 * @formula Chebyshev series on panels of a 24th of the period, halved until they die out; ∂f/∂UT1 = ∓f0/c·∂ρ̇/∂UT1;
 *   ∂f/∂t_along = ḟ − ∂f/∂UT1
 * @source Press et al., Numerical Recipes §5.8; mechanics
 * @units UTC ms → Hz, Hz/s
 * @frame TEME axes
 * @range within the part
 * @tolerance 1e-3 Hz and 1e-12 of the carrier of true propagation (plan/check-curve.test.ts)
 */
export function checkCurveOf(query: CheckCurveQuery): CheckCurve {
  const { propagator, link, site, ut1MinusUtcS, span } = query
  const { stateAt } = checkStatesOf(propagator, span)
  const panelMs = 86_400_000 / propagator.elements.meanMotionRevPerDay * PANEL_SHARE
  const toleranceHz = 1e-4 + 1e-13 * link.carrierHz
  // Both legs of a coherent link answer alike.
  const perMps = (link.direction === 'uplink' ? 1 : -1) * (link.turnaround ? 2 : 1) * link.carrierHz / SPEED_OF_LIGHT_MPS
  const path = { ...link, stateAt, site, ut1MinusUtcS }
  const sample: Sampler = (utcMs, into) => {
    into[AT.offsetHz] = dopplerHz(path, utcMs)
    into[AT.ut1HzPerS] = perMps * rangeRateByUt1(stateAt(utcMs)!, site, utcMs, ut1MinusUtcS)
  }
  const series = seriesOf(sample, { ...span, panelMs, nodes: NODES, tolerances: [toleranceHz, 1e-11 * link.carrierHz] })
  // What a link answers to errors by may be another curve than the one it is tuned along.
  const answering = answeringLink(link)
  const answer = answering === link
    ? null
    : seriesOf((utcMs, into) => {
        into[0] = dopplerHz({ ...path, ...answering }, utcMs)
      }, { ...span, panelMs, nodes: NODES, tolerances: [toleranceHz] })
  const at = new Float64Array(5).fill(NaN)
  const lookAt = (utcMs: UtcMs): Float64Array => {
    if (at[LOOKED_MS] === utcMs) return at
    series.lookAt(utcMs, at)
    at[AT.answerHzPerS] = answer ? answer.rateAt(utcMs) : at[AT.rateHzPerS]!
    at[LOOKED_MS] = utcMs
    return at
  }
  return {
    span, stateAt, lookAt,
    offsetHz: utcMs => lookAt(utcMs)[AT.offsetHz]!,
    rateHzPerS: utcMs => lookAt(utcMs)[AT.rateHzPerS]!,
    answerHzPerS: utcMs => lookAt(utcMs)[AT.answerHzPerS]!,
    ut1HzPerS: utcMs => lookAt(utcMs)[AT.ut1HzPerS]!,
    alongTrackHzPerS: utcMs => lookAt(utcMs)[AT.answerHzPerS]! - lookAt(utcMs)[AT.ut1HzPerS]!,
  }
}

const LOOKED_MS = 4
