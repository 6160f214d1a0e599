import type { Hz, RadioModel, Span, UtcMs } from '../types'
import type { Path } from './choose-path'
import type { Curve, Grid } from './corridor'
import { bestPath, widenedPath } from './best-path'
import { sampleCurve } from './corridor'
import type { Limits } from './hold-paths'

export interface RetuneProblem {
  /** Frequency to set for no residual. */
  readonly needed: { readonly frequencyHz: (utcMs: UtcMs) => Hz }
  /** What of the allowance the uncertainties take at an instant: timing + UT1 + k·spread. */
  readonly uncertaintyHz: (utcMs: UtcMs) => Hz
  readonly allowanceHz: Hz
  /** Workable parts, in order, apart from each other. */
  readonly parts: readonly Span[]
  readonly radio: RadioModel
  readonly jumpLimitHz: Hz | null
  /** Rows stay inside; null where nothing bounds them. */
  readonly bandLowHz: Hz | null
  readonly bandHighHz: Hz | null
  /** One dwell after the radio's previous row: no row takes effect earlier. */
  readonly notBeforeMs?: UtcMs
}

export interface PlannedRow { readonly effectMs: UtcMs, readonly frequencyHz: Hz }

export interface RetunePlan {
  readonly rows: readonly PlannedRow[]
  /** Share of the allowance the rows keep to; null where no plan keeps to it at all. */
  readonly kappa: 0.8 | 1 | null
  /** How far the rows pass beyond what the allowance and the uncertainties leave, Hz; 0 where a plan was found. */
  readonly excessHz: Hz
}

/** Share of the allowance that may be lost to following the curve by straight pieces; an eighth of one per cent of κ's room. */
const SAMPLING_SHARE = 2.5e-4

/**
 * Plans the retunes of a stepped radio: the fewest rows that keep |needed − set| ≤ h over the workable parts, both settings at
 * every retune, with h = κ·allowance − uncertainty − sampling error; κ = 0.8, and 1 only where 0.8 has no plan. Then least
 * max |needed − set|/h, then earliest starts, then lowest settings. Where κ = 1 has no plan either: half-width max(h, x) with the
 * least x that has one.
 *
 * - Rows take effect when whole-millisecond commands do: whole milliseconds plus the fraction of the radio's latency.
 * - The first row takes effect with the first workable instant, or earlier where the second could not keep its dwell otherwise.
 * - Rows stand on the radio's grid inside the band. A band without a grid point is passed over; the checker faults such rows.
 * - A retune between workable parts may jump by any amount, as nothing listens.
 *
 * The curve is followed by straight pieces; their error, 0.025 % of the allowance where the curve is smooth, is taken off h.
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
  const grid = gridInBand(problem, frequencyOf)
  const limits: Limits = {
    dwell: Math.max(1, Math.ceil(radio.minDwellS * 1000 - 1e-6)),
    jump: problem.jumpLimitHz === null ? Infinity : Math.floor(problem.jumpLimitHz / radio.stepHz + 1e-9),
    notBefore: notBefore - anchorMs,
  }
  const finish = (path: Path, kappa: 0.8 | 1 | null): RetunePlan => ({
    rows: path.starts.map((start, i) => ({ effectMs: anchorMs + start, frequencyHz: frequencyOf(path.settings[i]!) })),
    kappa,
    excessHz: kappa === null ? excessOf(curve, grid, path, allowanceHz) : 0,
  })

  const room = (share: number) => curve.uncertaintyHz.map(u => share * allowanceHz - u - curve.samplingErrorHz)
  for (const kappa of [0.8, 1] as const) {
    const path = bestPath(curve, grid, limits, room(kappa))
    if (path !== null) return finish(path, kappa)
  }
  return finish(widenedPath(curve, grid, limits, room(1)), null)
}

function gridInBand({ bandLowHz, bandHighHz, radio }: RetuneProblem, frequencyOf: (step: number) => Hz): Grid {
  const least = bandLowHz === null ? -Infinity : Math.ceil((bandLowHz - frequencyOf(0)) / radio.stepHz - 1e-9)
  const most = bandHighHz === null ? Infinity : Math.floor((bandHighHz - frequencyOf(0)) / radio.stepHz + 1e-9)
  return least <= most ? { stepHz: radio.stepHz, least, most } : { stepHz: radio.stepHz, least: -Infinity, most: Infinity }
}

/** Largest |needed − set| + uncertainty − allowance at the knots that each row serves. */
function excessOf(curve: Curve, grid: Grid, path: Path, allowanceHz: Hz): Hz {
  let worst = 0
  let row = 0
  curve.timeMs.forEach((time, j) => {
    while (row + 1 < path.starts.length && path.starts[row + 1]! <= time) row++
    const residual = Math.abs(curve.offsetHz[j]! - path.settings[row]! * grid.stepHz)
    worst = Math.max(worst, residual + curve.uncertaintyHz[j]! - allowanceHz)
  })
  return worst
}
