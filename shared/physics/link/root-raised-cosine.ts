/**
 * A matched pair of root-raised-cosine filters, one of them off in frequency. Everything is scaled to the symbol rate:
 * frequency in units of 1/T, so an offset is ε = Δf·T. Source: the raised-cosine spectrum of the textbooks (Proakis, Digital
 * Communications, Nyquist pulses); the overlap integral is the matched filter's output at the middle of the symbol.
 */

/** Panels are split where the spectra have corners, so that Gauss-Legendre sees smooth functions only. */
const GAUSS_NODES = [0.1834346424956498, 0.5255324099163290, 0.7966664774136267, 0.9602898564975363]
const GAUSS_WEIGHTS = [0.3626837833783620, 0.3137066458778873, 0.2223810344533745, 0.1012285362903763]

/**
 * Amplitude G(f) of the root-raised-cosine spectrum, G² the raised cosine with unit area.
 * @param f frequency in units of the symbol rate
 * @param rolloff α, 0 to 1
 *
 * @card Pulse spectrum: amplitude of the root-raised-cosine filter.
 * @formula 1 to (1−α)/2, cos(π(f − (1−α)/2)/(2α)) to (1+α)/2, 0 beyond
 * @source Proakis, Digital Communications, Nyquist pulses
 * @units symbol rates, roll-off → dimensionless
 * @frame none
 * @range 0 ≤ α ≤ 1
 * @tolerance 1e-6 in the overlap (link/loss.test.ts)
 */
export function rootRaisedCosine(f: number, rolloff: number): number {
  const a = Math.abs(f)
  const flat = (1 - rolloff) / 2
  const edge = (1 + rolloff) / 2
  if (a <= flat) return 1
  if (a >= edge) return 0
  return Math.cos(Math.PI * (a - flat) / (2 * rolloff))
}

/**
 * ∫G(f)G(f−ε)df; 1 at ε = 0, 0 from ε = 1 + α on, falling between. Better than 1e-10.
 *
 * @card Overlap: output of a pair of root-raised-cosine filters of which one is off in frequency.
 * @formula ∫G(f)·G(f − ε) df
 * @source matched filter’s output; Proakis, Digital Communications
 * @units symbol rates, roll-off → dimensionless
 * @frame none
 * @range 0 ≤ α ≤ 1; nothing from ε = 1 + α
 * @tolerance 1e-6 of a plain sum (link/loss.test.ts)
 */
export function overlap(epsilon: number, rolloff: number): number {
  return integrate(f => rootRaisedCosine(f, rolloff) * rootRaisedCosine(f - epsilon, rolloff), corners(epsilon, rolloff))
}

/**
 * Power of the inter-symbol interference beside the wanted symbol, dB below it; −Infinity never: floored at −300 dB.
 * Σ_{m≠0} |y(mT)|² / |y(0)|², with y the response of the offset pair; by Parseval the sum over all m is the power of the
 * spectrum folded at the symbol rate.
 *
 * @card Inter-symbol interference: power of the other symbols beside the wanted one.
 * @formula 10 log10(Σ_{m≠0} |y(mT)|²/|y(0)|²)
 * @source Parseval over the folded spectrum; mechanics of Nyquist pulses
 * @units symbol rates, roll-off → dB
 * @frame none
 * @range ε below 1 + α; floored at −300 dB
 * @tolerance 0.5 dB at −27 dB (link/loss.test.ts)
 */
export function interSymbolInterferenceDb(epsilon: number, rolloff: number): number {
  const product = (f: number) => rootRaisedCosine(f, rolloff) * rootRaisedCosine(f - epsilon, rolloff)
  const folded = (f: number) => {
    let sum = 0
    for (let k = -2; k <= 3; k++) sum += product(f + k)
    return sum * sum
  }
  const foldedCorners = corners(epsilon, rolloff).map(f => f - Math.floor(f))
  const total = integrate(folded, [0, 1, ...foldedCorners].sort((a, b) => a - b))
  const wanted = overlap(epsilon, rolloff)
  const rest = total / (wanted * wanted) - 1
  return rest <= 1e-30 ? -300 : 10 * Math.log10(rest)
}

function corners(epsilon: number, rolloff: number): number[] {
  const flat = (1 - rolloff) / 2
  const edge = (1 + rolloff) / 2
  const own = [-edge, -flat, flat, edge]
  return [...own, ...own.map(f => f + epsilon)].sort((a, b) => a - b)
}

function integrate(fn: (f: number) => number, breaks: readonly number[]): number {
  let total = 0
  for (let i = 1; i < breaks.length; i++) {
    const from = breaks[i - 1]!
    const half = (breaks[i]! - from) / 2
    if (half <= 0) continue
    // Two panels a piece: a cosine product spans at most half a turn on each.
    for (const start of [from, from + half]) {
      const middle = start + half / 2
      GAUSS_NODES.forEach((node, n) => {
        const reach = node * half / 2
        total += GAUSS_WEIGHTS[n]! * half / 2 * (fn(middle - reach) + fn(middle + reach))
      })
    }
  }
  return total
}
