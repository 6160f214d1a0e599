import type { Hz, RadioModel, Span, UtcMs } from '../types'
import { bestPath, widenedPath } from './best-path'
import { cadencePath } from './cadence-path'
import type { Path } from './choose-path'
import type { Curve, Grid } from './corridor'
import { sampleCurve } from './corridor'
import type { LinePath } from './line-chain'
import { largestMiss } from './miss'
import { lastFree, quietStretches } from './quiet'
import { rampPath, widenedRampPath } from './ramp-path'
import { slopeBounds } from './slope-bounds'

export interface RetuneProblem {
  /** Frequency to set on the radio's dial for no residual, and its rate, which is asked only where a drift limit binds slopes. */
  readonly needed: { readonly frequencyHz: (utcMs: UtcMs) => Hz, readonly rateHzPerS?: (utcMs: UtcMs) => number }
  /** What of the allowance the uncertainties take at an instant: timing + UT1 + k·spread. */
  readonly uncertaintyHz: (utcMs: UtcMs) => Hz
  readonly allowanceHz: Hz
  /** Workable parts, in order, apart from each other. */
  readonly parts: readonly Span[]
  readonly radio: RadioModel
  readonly jumpLimitHz: Hz | null
  /** Largest |ḟ − slope|; binds rows that ramp. What a constant leaves is the curve's own, and the checker's to say. */
  readonly driftLimitHzPerS?: number | null
  /** Rows stay inside; null where nothing bounds them. */
  readonly bandLowHz: Hz | null
  readonly bandHighHz: Hz | null
  /** One dwell after the radio's previous row: no row takes effect earlier. */
  readonly notBeforeMs?: UtcMs
  /** No row takes effect inside. */
  readonly quiet?: readonly Span[]
  /** How much earlier than needed the first row takes effect, where the radio is free; 0 when left out. */
  readonly firstRowLeadMs?: number
}

export interface PlannedRow { readonly effectMs: UtcMs, readonly frequencyHz: Hz, readonly slopeHzPerS: number }

export interface RetunePlan {
  readonly rows: readonly PlannedRow[]
  /** Share of the allowance the rows keep to; null where no plan keeps to it at all. */
  readonly kappa: 0.8 | 1 | null
  /** How far the rows pass beyond what the allowance and the uncertainties leave, Hz; 0 where a plan was found. */
  readonly excessHz: Hz
}

/** Share of the allowance that may be lost to following the curve by straight pieces; half of one per cent of κ's room. */
const SAMPLING_SHARE = 1e-3

/**
 * Plans the retunes of a radio: the fewest rows that keep |needed − set| ≤ h over the workable parts, both settings at
 * every retune, with h = κ·allowance − uncertainty − sampling error; κ = 0.8, and 1 only where 0.8 has no plan. Then least
 * max |needed − set|/h, then earliest starts, then lowest settings. Where κ = 1 has no plan either: half-width max(h, x) with the
 * least x that has one.
 *
 * - Rows take effect when whole-millisecond commands do: whole milliseconds plus the fraction of the radio's latency.
 * - The first row takes effect with the first workable instant, or earlier where the second could not keep its dwell otherwise.
 * - Rows stand on the radio's grid inside the band. A band without a grid point is passed over; the checker faults such rows.
 * - A retune between workable parts may jump by any amount, as nothing listens. None takes effect in a quiet span.
 * - Rows of a radio that ramps carry slopes, and may then be a row more than the fewest: `rampPath` says by what bound.
 * - A radio with a cadence is retuned at every tick instead: `cadencePath`.
 *
 * The curve is followed by straight pieces; their error, 0.1 % of the allowance where the curve is smooth, is taken off h.
 *
 * @card Tuning plan: the fewest settings of a stepped radio that stay within what the link bears.
 * @formula |f(t) − g_i| ≤ h(t) = κ·allowance − timing − UT1 − k·spread over the workable parts; least N, then least max |f − g|/h, then
 *   earliest, then lowest
 * @source reachable starts from hold to hold, optimal; mechanics of intervals
 * @units Hz, UTC ms → Hz, UTC ms of effect
 * @frame sky frequency, before any converter
 * @range κ = 0.8, else 1; where neither has a plan the least widening
 * @tolerance as exhaustive search finds it (plan/best-path.test.ts); bounds of the swing (plan/plan-retunes.test.ts)
 */
export function planRetunes(problem: RetuneProblem): RetunePlan {
  const { radio, allowanceHz } = problem
  const fraction = radio.latencyMs - Math.floor(radio.latencyMs)
  const notBefore = problem.notBeforeMs === undefined ? -Infinity : Math.ceil(problem.notBeforeMs - fraction) + fraction
  const parts = problem.parts.filter(part => part.toMs >= notBefore).map(part => ({ fromMs: Math.max(part.fromMs, notBefore), toMs: part.toMs }))
  if (parts.length === 0) return { rows: [], kappa: null, excessHz: 0 }

  const anchorMs = Math.floor(parts[0]!.fromMs - fraction) + fraction
  const referenceStep = Math.round((problem.needed.frequencyHz(parts[0]!.fromMs) - radio.offsetHz) / radio.stepHz)
  const frequencyOf = (step: number) => radio.offsetHz + (referenceStep + step) * radio.stepHz
  const curve = sampleCurve({
    frequencyHz: problem.needed.frequencyHz, uncertaintyHz: problem.uncertaintyHz, parts, anchorMs,
    referenceHz: frequencyOf(0), toleranceHz: Math.max(allowanceHz * SAMPLING_SHARE, 1e-4),
  })
  const modes = modesOf(problem, curve, { frequencyOf, notBefore: notBefore - anchorMs, parts })
  const finish = (path: LinePath, kappa: 0.8 | 1 | null): RetunePlan => ({
    rows: path.starts.map((start, i) => ({
      effectMs: anchorMs + start, frequencyHz: frequencyOf(path.settings[i]!), slopeHzPerS: path.slopes[i]! * modes.slopeStepHzPerS + 0,
    })),
    kappa,
    excessHz: kappa === null ? Math.max(0, missOf(path, 1)) : 0,
  })
  const missOf = (path: LinePath, share: number) =>
    largestMiss(curve, { stepHz: radio.stepHz, slopeStepHzPerS: modes.slopeStepHzPerS }, path) - share * allowanceHz

  if (modes.atEveryTick) {
    const path = modes.atEveryTick()
    return finish(path, missOf(path, 0.8) <= 0 ? 0.8 : missOf(path, 1) <= 0 ? 1 : null)
  }
  const room = (share: number) => curve.uncertaintyHz.map(u => share * allowanceHz - u - curve.samplingErrorHz)
  for (const kappa of [0.8, 1] as const) {
    const path = modes.best(room(kappa))
    if (path !== null) return finish(path, kappa)
  }
  return finish(modes.widened(room(1)), null)
}

interface Modes {
  readonly slopeStepHzPerS: number
  readonly atEveryTick: (() => LinePath) | null
  readonly best: (halfWidthHz: readonly number[]) => LinePath | null
  readonly widened: (halfWidthHz: readonly number[]) => LinePath
}

/** How this radio is planned: by steps or by ramps, as few rows as serve or one at every tick. */
function modesOf(problem: RetuneProblem, curve: Curve, { frequencyOf, notBefore, parts }: { frequencyOf: (step: number) => Hz, notBefore: number, parts: readonly Span[] }): Modes {
  const { radio, jumpLimitHz, firstRowLeadMs = 0 } = problem
  const grid = gridInBand(problem, frequencyOf)
  const dwell = Math.max(1, Math.ceil(radio.minDwellS * 1000 - 1e-6))
  const quiet = quietStretches(problem.quiet ?? [], curve.anchorMs)
  const { ramp, cadenceS } = radio
  const most = ramp ? Math.floor(ramp.maxSlopeHzPerS / ramp.slopeStepHzPerS + 1e-9) : 0
  const slopes = { stepHzPerS: ramp?.slopeStepHzPerS ?? 1, most }
  const { driftLimitHzPerS = null, needed: { rateHzPerS } } = problem
  const bounds = most > 0 && driftLimitHzPerS !== null && rateHzPerS ? slopeBounds(rateHzPerS, parts, curve.anchorMs, driftLimitHzPerS) : null
  const lead = Math.max(0, Math.round(firstRowLeadMs))
  const every = cadenceS ? Math.max(dwell, Math.round(cadenceS * 1000)) : null
  const atEveryTick = every === null ? null : () => cadencePath(curve, grid, { every, slopes, bounds, notBefore, quiet, lead })
  if (most > 0) {
    const band = [bandEdge(problem.bandLowHz, -Infinity, frequencyOf), bandEdge(problem.bandHighHz, Infinity, frequencyOf)] as const
    const limits = { slopes, bounds, dwell, jumpHz: jumpLimitHz ?? Infinity, notBefore, quiet, lead, band }
    return {
      slopeStepHzPerS: slopes.stepHzPerS, atEveryTick,
      best: half => rampPath(curve, grid, limits, half), widened: half => widenedRampPath(curve, grid, limits, half),
    }
  }
  const limits = { dwell, jump: jumpLimitHz === null ? Infinity : Math.floor(jumpLimitHz / radio.stepHz + 1e-9), notBefore, quiet }
  const leading = (path: Path): LinePath => {
    const early = Math.max(lastFree(quiet, path.starts[0]! - lead), Math.ceil(notBefore))
    return { ...path, starts: [Math.min(early, path.starts[0]!), ...path.starts.slice(1)], slopes: path.settings.map(() => 0) }
  }
  return {
    slopeStepHzPerS: slopes.stepHzPerS, atEveryTick,
    best: (half) => {
      const path = bestPath(curve, grid, limits, half)
      return path && leading(path)
    },
    widened: half => leading(widenedPath(curve, grid, limits, half)),
  }
}

const bandEdge = (edgeHz: Hz | null, none: number, frequencyOf: (step: number) => Hz) => edgeHz === null ? none : edgeHz - frequencyOf(0)

function gridInBand({ bandLowHz, bandHighHz, radio }: RetuneProblem, frequencyOf: (step: number) => Hz): Grid {
  const least = bandLowHz === null ? -Infinity : Math.ceil((bandLowHz - frequencyOf(0)) / radio.stepHz - 1e-9)
  const most = bandHighHz === null ? Infinity : Math.floor((bandHighHz - frequencyOf(0)) / radio.stepHz + 1e-9)
  return least <= most ? { stepHz: radio.stepHz, least, most } : { stepHz: radio.stepHz, least: -Infinity, most: Infinity }
}
