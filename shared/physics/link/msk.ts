import { amplitudeCurve } from './curve'
import { sinc } from './sinc'

/**
 * Coherent MSK, GMSK to good approximation; T is a bit. Half-sine pulses of two bits in both arms: the matched filter's output
 * is ∫cos²(πt/2T)·e^(j2πΔf·t) over two bits, |sinc 2ε / (1 − 4ε²)|. 6.02 dB at ε = ½; first null at ε = 1.
 * Source: spectrum of the raised-cosine window.
 *
 * @card MSK: loss of a coherent MSK detector.
 * @formula −20 log10 |sinc 2ε / (1 − 4ε²)|
 * @source half-sine pulse; spectrum of the raised-cosine window, from memory
 * @units bit rates → dB
 * @frame none
 * @range to the first null at 1
 * @tolerance 0.0005 dB at 0.1, 1e-9 dB of a plain integral (link/detectors.test.ts)
 */
export const mskCurve = amplitudeCurve(1, epsilon => Math.abs(raisedCosineResponse(2 * epsilon)))

/** sinc x / (1 − x²), ½ at x = 1, where the quotient is 0/0: sinc x = sinc(1 − x)·(1 − x)/x. */
function raisedCosineResponse(x: number): number {
  return x < 0.5 ? sinc(x) / (1 - x * x) : sinc(1 - x) / (x * (1 + x))
}
