import type { Curve } from './corridor'
import type { LinePath } from './line-chain'

/**
 * Largest |needed − set| + uncertainty of rows on a curve, Hz: at its knots, and on both sides of every retune.
 *
 * @card Largest miss: what rows leave of a curve.
 * @formula max of |f − g_i − s_i·(t − e_i)| + uncertainty at knots and both sides of retunes
 * @source mechanics
 * @units Hz, ms → Hz
 * @frame the radio’s dial
 * @range the curve’s sampling error added
 * @tolerance 2 Hz of 30 at a cadence of one second (plan/cadence.test.ts)
 */
export function largestMiss(curve: Curve, { stepHz, slopeStepHzPerS }: { stepHz: number, slopeStepHzPerS: number }, path: LinePath): number {
  let worst = 0
  const ask = (row: number, time: number, offsetHz: number, uncertaintyHz: number) => {
    const set = path.settings[row]! * stepHz + path.slopes[row]! * slopeStepHzPerS * (time - path.starts[row]!) / 1000
    worst = Math.max(worst, Math.abs(offsetHz - set) + uncertaintyHz + curve.samplingErrorHz)
  }
  let row = 0
  curve.timeMs.forEach((time, j) => {
    while (row + 1 < path.starts.length && path.starts[row + 1]! <= time) {
      const retune = path.starts[++row]!
      if (curve.beginsPart[j] && retune < time) continue
      const before = j === 0 ? 0 : j - 1
      const length = time - curve.timeMs[before]!
      const share = length > 0 ? (retune - curve.timeMs[before]!) / length : 1
      const between = (values: readonly number[]) => values[before]! + (values[j]! - values[before]!) * share
      for (const side of [row - 1, row]) ask(side, retune, between(curve.offsetHz), between(curve.uncertaintyHz))
    }
    ask(row, time, curve.offsetHz[j]!, curve.uncertaintyHz[j]!)
  })
  return worst
}
