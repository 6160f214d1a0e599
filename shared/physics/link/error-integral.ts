/** Relative change at which the sum is taken as converged. */
const TOLERANCE = 1e-13
/** From here on the periodic sum needs a few dozen nodes; below it the integrand has a step that needs another variable. */
const PLAIN_FROM_DISTANCE = 0.3
const [LOG_STEP, LOG_REACH] = [0.125, 36]

/**
 * F(a,b) = Q₁(a,b) − ½e^(−(a²+b²)/2)·I₀(ab), the chance that of two noisy envelopes the one with mean a exceeds the one with
 * mean b. Dimensionless, a, b ≥ 0; F(a,b) + F(b,a) = 1, F(a,a) = ½, F(0,b) = ½e^(−b²/2), and F ≤ ½e^(−(b−a)²/2) for a ≤ b.
 *
 * Nothing is subtracted: with z = a/b < 1 it is (1/4π)∫₋π^π (1−z²)/u·e^(−b²u/2) dθ, u = 1 + 2z sin θ + z². The kernel (1−z²)/u is
 * Poisson's and peaks sharply for z near 1; tan(φ/2) = (1−z)/(1+z)·tan(ψ/2), φ = θ + π/2, makes it dψ and
 * u = (1−z²)²/(1 + 2z cos ψ + z²), so with t = tan(ψ/2), d = b − a, s = b + a
 *
 *     F = ½e^(−d²/2) · (1/π)∫₀^π exp(−½d² · 4ab·t²/(s² + d²t²)) dψ.
 *
 * Source: Stein 1964 for F in binary decisions; Simon and Alouini, Digital Communication over Fading Channels, for the Marcum
 * function with finite limits; from memory. Relative error below 1e-12.
 *
 * @card Decision error: chance that the weaker of two noisy envelopes reads the stronger.
 * @formula F(a,b) = Q₁(a,b) − ½e^(−(a²+b²)/2)·I₀(ab) = (1/2π)∫₀^π exp(−½d²s²/(s² − 4ab sin²(ψ/2))) dψ
 * @source Stein 1964; Simon and Alouini; from memory
 * @units dimensionless
 * @frame none
 * @range a, b ≥ 0
 * @tolerance 1e-9 of an integral of Rice’s density (link/error-integral.test.ts)
 */
export function decisionError(a: number, b: number): number {
  if (a > b) return 1 - decisionError(b, a)
  const d = b - a
  if (d * d === 0) return 0.5
  // The largest of the integrand stands outside, so that tiny error rates stay within the range of doubles.
  return meanOver(tangentSquared => Math.exp(-2 * a * b * d * d * tangentSquared / ((a + b) ** 2 + d * d * tangentSquared)), d) / 2 * Math.exp(-d * d / 2)
}

/** Mean of a function of tan²(ψ/2) over 0 ≤ ψ ≤ π. It is 1 at ψ = 0 and falls to some value at π within a width about d. */
function meanOver(of: (tangentSquared: number) => number, d: number): number {
  return d < PLAIN_FROM_DISTANCE ? meanByLogarithm(of) : meanByAngle(of)
}

/** Even and periodic in ψ: the trapezoidal rule converges geometrically; nodes are doubled until nothing changes. */
function meanByAngle(of: (tangentSquared: number) => number): number {
  const at = (psi: number) => of(Math.tan(psi / 2) ** 2)
  let nodes = 16
  let sum = (1 + at(Math.PI)) / 2
  for (let i = 1; i < nodes; i++) sum += at(Math.PI * i / nodes)
  for (;;) {
    const before = sum / nodes
    for (let i = 0; i < nodes; i++) sum += at(Math.PI * (i + 0.5) / nodes)
    nodes *= 2
    if (Math.abs(sum / nodes - before) <= TOLERANCE * before || nodes > 4096) return sum / nodes
  }
}

/** With x = ln tan(ψ/2), dψ = dx/cosh x, the step keeps its width wherever it lies, and both tails are e^(−|x|). */
function meanByLogarithm(of: (tangentSquared: number) => number): number {
  let sum = 0
  for (let x = -LOG_REACH; x <= LOG_REACH; x += LOG_STEP) sum += of(Math.exp(2 * x)) / Math.cosh(x)
  return sum * LOG_STEP / Math.PI
}
