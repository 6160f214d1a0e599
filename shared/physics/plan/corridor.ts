import type { Hz, Span, UtcMs } from '../types'

/**
 * The needed frequency over the workable parts, and how wide a setting may miss it, as straight pieces between knots.
 *
 * Time is in milliseconds from `anchorMs`, so that the instants at which a row can take effect are the whole numbers.
 * Frequency is in hertz from grid point `reference` of the radio, so that grid points are whole multiples of the step: gigahertz
 * in a double leave only a microhertz.
 */
export interface Curve {
  readonly anchorMs: UtcMs
  readonly referenceHz: Hz
  readonly timeMs: readonly number[]
  readonly offsetHz: readonly number[]
  readonly uncertaintyHz: readonly number[]
  /** True where a knot begins a workable part. */
  readonly beginsPart: readonly boolean[]
  /** Bound on how far the pieces stray from needed frequency ± uncertainty between knots; planners take it off the half-width. */
  readonly samplingErrorHz: Hz
}

export interface CurveSource {
  readonly frequencyHz: (utcMs: UtcMs) => Hz
  readonly uncertaintyHz: (utcMs: UtcMs) => Hz
  readonly parts: readonly Span[]
  readonly anchorMs: UtcMs
  readonly referenceHz: Hz
  /** Wanted sampling error, Hz. */
  readonly toleranceHz: Hz
}

const FIRST_STEP_MS = 16_000
const LEAST_STEP_MS = 3

/**
 * Samples the curve until straight pieces follow it. Each piece is tried at its thirds: a parabola lies 9/8 times closer to its
 * chord there than at worst, and a piece cut at its thirds strays an eighth of what was measured, so a piece is accepted at
 * four times the tolerance with its thirds as knots: twice as close as needed. Thirds, not the middle, since an inflection hides there.
 *
 * @card Straight pieces: the needed frequency as the planner follows it.
 * @formula chords halved in thirds until they stray less than the tolerance; the stray is taken off h
 * @source mechanics: a parabola strays 9/8 of its thirds
 * @units Hz, UTC ms → Hz, ms
 * @frame from the radio’s reference step
 * @range smooth curves; pieces of 3 ms at least
 * @tolerance 0.025 % of the allowance: plans hold when checked (predict/build-table.test.ts)
 */
export function sampleCurve(source: CurveSource): Curve {
  const { anchorMs, referenceHz, toleranceHz } = source
  const timeMs: number[] = []
  const offsetHz: number[] = []
  const uncertaintyHz: number[] = []
  const beginsPart: boolean[] = []
  let samplingErrorHz = 0

  const at = (time: number): Knot => ({
    time, offset: source.frequencyHz(anchorMs + time) - referenceHz, uncertainty: source.uncertaintyHz(anchorMs + time),
  })
  const keep = (knot: Knot, begins: boolean) => {
    timeMs.push(knot.time)
    offsetHz.push(knot.offset)
    uncertaintyHz.push(knot.uncertainty)
    beginsPart.push(begins)
  }
  const refine = (from: Knot, to: Knot): void => {
    const third = (to.time - from.time) / 3
    if (third * 3 <= LEAST_STEP_MS) {
      samplingErrorHz = Math.max(samplingErrorHz, Math.abs(from.uncertainty - to.uncertainty))
      return keep(to, false)
    }
    const one = at(from.time + third)
    const two = at(from.time + 2 * third)
    const stray = Math.max(strayFromChord(from, to, one, 1 / 3), strayFromChord(from, to, two, 2 / 3))
    if (stray <= 4 * toleranceHz) {
      samplingErrorHz = Math.max(samplingErrorHz, stray / 4)
      keep(one, false)
      keep(two, false)
      return keep(to, false)
    }
    refine(from, one)
    refine(one, two)
    refine(two, to)
  }

  for (const part of source.parts) {
    const start = part.fromMs - anchorMs
    const length = part.toMs - part.fromMs
    let from = at(start)
    keep(from, true)
    const pieces = Math.ceil(length / FIRST_STEP_MS)
    for (let i = 1; i <= pieces; i++) {
      const to = at(start + length * i / pieces)
      refine(from, to)
      from = to
    }
  }
  return { anchorMs, referenceHz, timeMs, offsetHz, uncertaintyHz, beginsPart, samplingErrorHz }
}

interface Knot { readonly time: number, readonly offset: number, readonly uncertainty: number }

function strayFromChord(from: Knot, to: Knot, knot: Knot, share: number): number {
  const offset = knot.offset - from.offset - (to.offset - from.offset) * share
  const uncertainty = knot.uncertainty - from.uncertainty - (to.uncertainty - from.uncertainty) * share
  return Math.abs(offset) + Math.abs(uncertainty)
}

/** A corridor: at each knot the lowest and highest setting that is good enough, and the grid points a radio may use. */
export interface Corridor {
  readonly timeMs: readonly number[]
  readonly lowHz: readonly number[]
  readonly highHz: readonly number[]
  readonly beginsPart: readonly boolean[]
  readonly grid: Grid
}

/** Whole multiples of `stepHz` from `least` to `most`. */
export interface Grid { readonly stepHz: Hz, readonly least: number, readonly most: number }

/**
 * The corridor of a curve with a half-width given at each knot.
 *
 * @card Corridor: lowest and highest setting that is good enough at each knot.
 * @formula f ± h
 * @source mechanics
 * @units Hz → Hz
 * @frame from the radio’s reference step
 * @range any half-width
 * @tolerance equal to exhaustive search (plan/best-path.test.ts)
 */
export function corridorOf(curve: Curve, grid: Grid, halfWidthHz: (knot: number) => Hz): Corridor {
  const half = curve.timeMs.map((_, j) => halfWidthHz(j))
  return {
    timeMs: curve.timeMs,
    lowHz: curve.offsetHz.map((f, j) => f - half[j]!),
    highHz: curve.offsetHz.map((f, j) => f + half[j]!),
    beginsPart: curve.beginsPart,
    grid,
  }
}

/** The same corridor with time running backwards. */
export function mirrored(c: Corridor): Corridor {
  const last = c.timeMs.length - 1
  return {
    timeMs: c.timeMs.map((_, j) => -c.timeMs[last - j]!),
    lowHz: [...c.lowHz].reverse(),
    highHz: [...c.highHz].reverse(),
    beginsPart: c.timeMs.map((_, j) => j === 0 || c.beginsPart[last - j + 1]!),
    grid: c.grid,
  }
}

/** Slack on grid comparisons, Hz: below what a gigahertz in a double resolves. */
export const SLACK_HZ = 1e-6

/**
 * Lowest and highest grid multiple within [lowHz, highHz]; none fits when the first is above the second.
 *
 * @card Grid points: which settings of a radio lie within a range.
 * @formula ⌈low/q⌉ ≤ k ≤ ⌊high/q⌋, within the band
 * @source mechanics of a grid
 * @units Hz → steps of the grid
 * @frame from the radio’s reference step
 * @range steps above 0; slack 1 µHz
 * @tolerance equal to exhaustive search (plan/best-path.test.ts)
 */
export function gridRange(grid: Grid, lowHz: Hz, highHz: Hz): readonly [number, number] {
  return [
    // Adding zero makes −0 plain.
    Math.max(grid.least, Math.ceil((lowHz - SLACK_HZ) / grid.stepHz)) + 0,
    Math.min(grid.most, Math.floor((highHz + SLACK_HZ) / grid.stepHz)),
  ]
}
