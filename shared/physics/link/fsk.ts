import { decisionError } from './error-integral'
import type { ErrorRateModel } from './degradation'
import { sinc } from './sinc'

/**
 * Non-coherent binary FSK, tones 1/T apart: the offset weakens the tone's own filter, b = √γ·|sinc ε|, and leaks into the other
 * one, a₁,₂ = √γ·|sinc(1 ∓ ε)| for the upper and the lower tone: P = ½[F(a₁,b) + F(a₂,b)]. Without offset ½e^(−γ/2): 13.352 dB at
 * 1e-5. At ε = ½ one tone lies half-way between both filters: the detector fails there.
 * Source: Stein 1964, correlated or unequal envelopes; exact for independent noise in both filters.
 *
 * @card FSK: error rate of non-coherent binary FSK at an offset.
 * @formula P = ½[F(a₁,b) + F(a₂,b)], b = √γ·|sinc ε|, a₁,₂ = √γ·|sinc(1 ∓ ε)|
 * @source Stein 1964; from memory
 * @units Eb/N0 as a ratio, symbol rates → share of bits
 * @frame none
 * @range tones 1/T apart; fails at ε = ½
 * @tolerance 0.001 dB in the degradation (link/detectors.test.ts)
 */
export const fsk: ErrorRateModel = {
  failsAtEpsilon: 0.5,
  errorRate(ebN0, epsilon) {
    const amplitude = Math.sqrt(ebN0)
    const own = amplitude * Math.abs(sinc(epsilon))
    const leaks = [1 - epsilon, 1 + epsilon].map(spacing => amplitude * Math.abs(sinc(spacing)))
    return (decisionError(leaks[0]!, own) + decisionError(leaks[1]!, own)) / 2
  },
  requiredEbN0: errorRate => 2 * Math.log(0.5 / errorRate),
  distance: epsilon => Math.abs(sinc(epsilon)) - Math.abs(sinc(1 - epsilon)),
}
