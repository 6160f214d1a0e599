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
const MOST_PIECES = 8
/** How much closer than its thirds' stray a piece cut there is taken to be; a parabola is eight times. */
const CLOSER = 6

/**
 * Samples the curve until straight pieces follow it. Each piece is tried at its thirds: a parabola lies 9/8 times closer to its
 * chord there than at worst, and a piece cut at its thirds strays an eighth of what was measured, so a piece is accepted at
 * six times the tolerance with its thirds as knots: a third closer than needed. Thirds, not the middle, since an inflection hides there.
 *
 * @card Straight pieces: the needed frequency as the planner follows it.
 * @formula chords cut until they stray less than the tolerance at their thirds; the stray is taken off h
 * @source mechanics: a parabola strays 9/8 of its thirds
 * @units Hz, UTC ms → Hz, ms
 * @frame from the radio’s reference step
 * @range smooth curves; pieces of 3 ms at least
 * @tolerance 0.1 % of the allowance: plans hold when checked (predict/build-table.test.ts)
 */
export function sampleCurve(source: CurveSource): Curve {
  const { anchorMs, referenceHz, toleranceHz } = source
  const timeMs: number[] = []
  const offsetHz: number[] = []
  const uncertaintyHz: number[] = []
  const beginsPart: boolean[] = []
  let samplingErrorHz = 0

  const offsetAt = (time: number): Hz => source.frequencyHz(anchorMs + time) - referenceHz
  const uncertaintyAt = (time: number): Hz => source.uncertaintyHz(anchorMs + time)
  const keep = (time: number, offset: Hz, uncertainty: Hz, begins: boolean) => {
    timeMs.push(time)
    offsetHz.push(offset)
    uncertaintyHz.push(uncertainty)
    beginsPart.push(begins)
  }
  /** From the knot kept last to the one given, which is kept. */
  const refine = (time: number, offset: Hz, uncertainty: Hz): void => {
    const last = timeMs.length - 1
    const fromTime = timeMs[last]!
    const fromOffset = offsetHz[last]!
    const fromUncertainty = uncertaintyHz[last]!
    const third = (time - fromTime) / 3
    if (third * 3 <= LEAST_STEP_MS) {
      samplingErrorHz = Math.max(samplingErrorHz, Math.abs(fromUncertainty - uncertainty))
      return keep(time, offset, uncertainty, false)
    }
    const oneTime = fromTime + third
    const oneOffset = offsetAt(oneTime)
    const oneUncertainty = uncertaintyAt(oneTime)
    const twoTime = fromTime + 2 * third
    const twoOffset = offsetAt(twoTime)
    const twoUncertainty = uncertaintyAt(twoTime)
    const stray = Math.max(
      Math.abs(oneOffset - (2 * fromOffset + offset) / 3) + Math.abs(oneUncertainty - (2 * fromUncertainty + uncertainty) / 3),
      Math.abs(twoOffset - (fromOffset + 2 * offset) / 3) + Math.abs(twoUncertainty - (fromUncertainty + 2 * uncertainty) / 3),
    )
    if (stray <= CLOSER * toleranceHz) {
      samplingErrorHz = Math.max(samplingErrorHz, stray / CLOSER)
      keep(oneTime, oneOffset, oneUncertainty, false)
      keep(twoTime, twoOffset, twoUncertainty, false)
      return keep(time, offset, uncertainty, false)
    }
    // A parabola's stray falls with the square of a piece's length.
    const pieces = Math.min(MOST_PIECES, Math.ceil(Math.sqrt(stray / (CLOSER * toleranceHz))))
    for (let i = 1; i < pieces; i++) {
      const end = fromTime + 3 * third * i / pieces
      refine(end, offsetAt(end), uncertaintyAt(end))
    }
    refine(time, offset, uncertainty)
  }

  for (const part of source.parts) {
    const start = part.fromMs - anchorMs
    const length = part.toMs - part.fromMs
    keep(start, offsetAt(start), uncertaintyAt(start), true)
    const pieces = Math.ceil(length / FIRST_STEP_MS)
    for (let i = 1; i <= pieces; i++) {
      const time = start + length * i / pieces
      refine(time, offsetAt(time), uncertaintyAt(time))
    }
  }
  return { anchorMs, referenceHz, timeMs, offsetHz, uncertaintyHz, beginsPart, samplingErrorHz }
}

/** A corridor: at each knot the lowest and highest setting that is good enough, and the grid points a radio may use. */
export interface Corridor {
  readonly timeMs: ArrayLike<number>
  readonly lowHz: Float64Array
  readonly highHz: Float64Array
  readonly beginsPart: ArrayLike<boolean>
  readonly grid: Grid
}

/** Whole multiples of `stepHz` from `least` to `most`. */
export interface Grid { readonly stepHz: Hz, readonly least: number, readonly most: number }

/**
 * The corridor of a curve with a half-width given at each knot. `reused`, of the same curve, is overwritten.
 *
 * @card Corridor: lowest and highest setting that is good enough at each knot.
 * @formula f ± h
 * @source mechanics
 * @units Hz → Hz
 * @frame from the radio’s reference step
 * @range any half-width
 * @tolerance equal to exhaustive search (plan/best-path.test.ts)
 */
export function corridorOf(curve: Curve, grid: Grid, halfWidthHz: (knot: number) => Hz, reused?: Corridor): Corridor {
  const { timeMs, offsetHz, beginsPart } = curve
  const c = reused ?? { timeMs, lowHz: new Float64Array(timeMs.length), highHz: new Float64Array(timeMs.length), beginsPart, grid }
  for (let j = 0; j < timeMs.length; j++) {
    const half = halfWidthHz(j)
    c.lowHz[j] = offsetHz[j]! - half
    c.highHz[j] = offsetHz[j]! + half
  }
  return c
}

/** The same corridor with time running backwards. */
export function mirrored(c: Corridor): Corridor {
  const count = c.timeMs.length
  const timeMs = new Float64Array(count)
  const beginsPart = new Array<boolean>(count)
  for (let j = 0; j < count; j++) {
    timeMs[j] = -c.timeMs[count - 1 - j]!
    beginsPart[j] = j === 0 || c.beginsPart[count - j]!
  }
  return {
    timeMs, beginsPart, lowHz: c.lowHz.slice().reverse(), highHz: c.highHz.slice().reverse(), grid: c.grid,
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
  // Adding zero makes −0 plain.
  return [leastStep(grid, lowHz) + 0, mostStep(grid, highHz)]
}

/**
 * Whether any grid multiple lies within [lowHz, highHz].
 *
 * @card Grid point there: whether a radio has a setting within a range.
 * @formula ⌈low/q⌉ ≤ ⌊high/q⌋, within the band
 * @source mechanics of a grid
 * @units Hz → true or false
 * @frame from the radio’s reference step
 * @range steps above 0; slack 1 µHz
 * @tolerance equal to exhaustive search (plan/best-path.test.ts)
 */
export const isOnGrid = (grid: Grid, lowHz: Hz, highHz: Hz): boolean => leastStep(grid, lowHz) <= mostStep(grid, highHz)

const leastStep = ({ stepHz, least }: Grid, lowHz: Hz): number => Math.max(least, Math.ceil((lowHz - SLACK_HZ) / stepHz))
const mostStep = ({ stepHz, most }: Grid, highHz: Hz): number => Math.min(most, Math.floor((highHz + SLACK_HZ) / stepHz))
