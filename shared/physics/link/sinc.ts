/**
 * Normalised sinc, sin(πx)/(πx), 1 at zero. Dimensionless. Below 1e-4 by its Taylor series (next term 2e-15), because the
 * quotient loses digits there.
 *
 * @card Normalised sinc: the spectrum of a rectangular pulse.
 * @formula sin πx/(πx)
 * @source DLMF 3.3.43; from memory
 * @units dimensionless
 * @frame none
 * @range all x
 * @tolerance 0.0005 dB through the loss (link/loss.test.ts)
 */
export function sinc(x: number): number {
  const y = Math.PI * x
  if (Math.abs(x) < 1e-4) return 1 - y * y / 6
  return Math.sin(y) / y
}
