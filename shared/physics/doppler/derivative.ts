/** Half-width of the stencil is twice this, s. At 437 MHz in low orbit the truncation is below 1e-6 Hz/s. */
export const DIFFERENCE_STEP_S = 0.25

const CENTRAL = [1 / 12, -8 / 12, 0, 8 / 12, -1 / 12]
const FORWARD = [-25 / 12, 48 / 12, -36 / 12, 16 / 12, -3 / 12]
const BACKWARD = [3 / 12, -16 / 12, 36 / 12, -48 / 12, 25 / 12]

/**
 * Derivative at 0 of a function of seconds by five points, fourth order (Abramowitz and Stegun, table 25.2): central,
 * or one-sided where the function throws a RangeError on the other side (an ephemeris's edge).
 *
 * @card Derivative: slope of a curve in time by five points.
 * @formula (f(−2h) − 8f(−h) + 8f(h) − f(2h))/(12h), h = 0.25 s; one-sided at an edge
 * @source Abramowitz, Stegun, table 25.2
 * @units any → any per s
 * @frame none
 * @range functions that are smooth over a second
 * @tolerance 1e-3 Hz/s at 437.5 MHz, edges included (doppler/rates.test.ts)
 */
export function derivativePerS(f: (seconds: number) => number): number {
  const by = (weights: readonly number[], first: number): number => {
    let sum = 0
    weights.forEach((weight, i) => {
      if (weight !== 0) sum += weight * f((first + i) * DIFFERENCE_STEP_S)
    })
    return sum / DIFFERENCE_STEP_S
  }
  const attempts: readonly (readonly [readonly number[], number])[] = [[CENTRAL, -2], [FORWARD, 0], [BACKWARD, -4]]
  let outside: unknown
  for (const [weights, first] of attempts) {
    try {
      return by(weights, first)
    }
    catch (error) {
      if (!(error instanceof RangeError)) throw error
      outside = error
    }
  }
  throw outside
}
