import type { AgedError } from './pairs'

/** Edges of the age bins, days. */
const BIN_EDGES_DAYS = [0, 0.5, 1, 1.5, 2, 3, 4, 5, 7, 10, 14] as const
/** Half of a normal distribution lies within 0.6745 σ of its middle. */
const SIGMA_OVER_MEDIAN = 1.4826

/** One sigma of timing at an age. */
export interface AgeBin { readonly ageDays: number, readonly sigmaS: number, readonly pairs: number }

export interface TimingGrowth { readonly floorS: number, readonly growthSPerDay: number }

/**
 * Spread of timing errors by age: 1.4826·median|x| about zero (the consistent scale of a normal distribution; Rousseeuw
 * and Croux 1993), so that a few bad sets do not count. The age of a bin is the mean of its pairs'. Empty bins are left out.
 *
 * @card Spread by age: one sigma of timing in bins of age.
 * @formula σ = 1.4826·median|x|, about zero
 * @source Rousseeuw, Croux 1993
 * @units s, days → s
 * @frame along the orbit
 * @range ages to 14 days
 * @tolerance 25 % with 100 sets of known error (accuracy/learned.test.ts)
 */
export function ageBins(errors: readonly AgedError[]): AgeBin[] {
  return BIN_EDGES_DAYS.slice(1).flatMap((to, i) => {
    const from = BIN_EDGES_DAYS[i]!
    const inside = errors.filter(({ ageDays }) => ageDays > from && ageDays <= to)
    if (inside.length === 0) return []
    const ageDays = inside.reduce((sum, error) => sum + error.ageDays, 0) / inside.length
    return [{ ageDays, sigmaS: SIGMA_OVER_MEDIAN * median(inside.map(error => Math.abs(error.timingS))), pairs: inside.length }]
  })
}

function median(values: number[]): number {
  values.sort((a, b) => a - b)
  const middle = values.length >> 1
  return values.length % 2 === 1 ? values[middle]! : (values[middle - 1]! + values[middle]!) / 2
}

/**
 * σ(age) = floor + growth·age through the bins, by least squares with as many weights as pairs: drag bends the spreads
 * upwards, and a line that were truest to the smallest would promise too much of elements a week old. The floor is at
 * least `leastFloorS`, the growth at least 0: differencing hides what all sets have in common. Seconds and days. Null without a bin.
 *
 * @card Floor and growth: the line through the spreads.
 * @formula σ(age) = floor + growth·age, least squares weighted by pairs; floor ≥ the least, growth ≥ 0
 * @source least squares; common practice
 * @units s, days → s, s/day
 * @frame along the orbit
 * @range at least one bin; one alone gives growth only
 * @tolerance 1e-9 s of points on a line (accuracy/learned.test.ts)
 */
export function fitGrowth(bins: readonly AgeBin[], leastFloorS: number): TimingGrowth | null {
  if (bins.length === 0) return null
  return weightedLine(bins.map(bin => ({ age: bin.ageDays, sigma: bin.sigmaS, weight: bin.pairs })), leastFloorS)
}

interface Point { readonly age: number, readonly sigma: number, readonly weight: number }

/** The least-squares line within its bounds: where the free one leaves them, the best on the nearer bound. */
function weightedLine(points: readonly Point[], leastFloor: number): TimingGrowth {
  const sum = (of: (p: Point) => number): number => points.reduce((total, p) => total + p.weight * of(p), 0)
  const [w, a, s, aa, as] = [sum(() => 1), sum(p => p.age), sum(p => p.sigma), sum(p => p.age ** 2), sum(p => p.age * p.sigma)]
  const determinant = w * aa - a * a
  // One age alone cannot tell floor from growth: the floor is then the least.
  if (points.length > 1 && determinant > 1e-9 * w * aa) {
    const growth = (w * as - a * s) / determinant
    const floor = (s - growth * a) / w
    if (growth < 0) return { floorS: Math.max(leastFloor, s / w), growthSPerDay: 0 }
    if (floor >= leastFloor) return { floorS: floor, growthSPerDay: growth }
  }
  return { floorS: leastFloor, growthSPerDay: Math.max(0, (as - leastFloor * a) / aa) }
}
