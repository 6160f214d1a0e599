/**
 * Complementary error function for x ≥ 0, relative error below 1e-13 up to x = 26, where it leaves the range of doubles.
 * Below 2 by the series of erf, DLMF 7.6.2; from there by the continued fraction DLMF 7.9.1, evaluated from its tail.
 *
 * @card Complementary error function: the tail of a normal distribution.
 * @formula 2/√π ∫_x^∞ e^(−t²) dt, by series below 2, by continued fraction above
 * @source DLMF 7.6.2 and 7.9.1
 * @units dimensionless
 * @frame none
 * @range 0 ≤ x ≤ 26
 * @tolerance 1e-11 of printed tables (link/error-rate.test.ts)
 */
export function erfc(x: number): number {
  if (x < 2) {
    let term = x
    let sum = x
    for (let n = 1; Math.abs(term) > 1e-18 * sum; n++) {
      term *= 2 * x * x / (2 * n + 1)
      sum += term
    }
    return 1 - 2 / Math.sqrt(Math.PI) * Math.exp(-x * x) * sum
  }
  let tail = x
  for (let n = 120; n >= 1; n--) tail = x + n / 2 / tail
  return Math.exp(-x * x) / (Math.sqrt(Math.PI) * tail)
}
