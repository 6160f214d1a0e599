import { decisionError } from './error-integral'
import type { ErrorRateModel } from './degradation'
import { sinc } from './sinc'

/**
 * DBPSK with matched filter and one symbol's delay: P = F(a,b), a, b = √(γ·sinc²ε·(1 ∓ cos 2πε)), that is √(2γ)·sinc ε·sin πε and
 * √(2γ)·sinc ε·cos πε. Without offset ½e^(−γ): 10.342 dB at 1e-5. At ε = ¼ both are equal and every bit is a coin's toss: the
 * detector fails there. Turning the decision variable by 2πε alone (cos²) understates the loss: noise grows with noise.
 * Source: Stein 1964; exact.
 *
 * @card Differential: error rate of DBPSK at an offset.
 * @formula P = F(a,b), a, b = √(γ·sinc²ε·(1 ∓ cos 2πε))
 * @source Stein 1964; from memory
 * @units Eb/N0 as a ratio, symbol rates → share of bits
 * @frame none
 * @range fails at ε = ¼
 * @tolerance 0.005 dB in the degradation (link/detectors.test.ts)
 */
export const differential: ErrorRateModel = {
  failsAtEpsilon: 0.25,
  errorRate(ebN0, epsilon) {
    const amplitude = Math.sqrt(2 * ebN0) * Math.abs(sinc(epsilon))
    return decisionError(amplitude * Math.abs(Math.sin(Math.PI * epsilon)), amplitude * Math.abs(Math.cos(Math.PI * epsilon)))
  },
  requiredEbN0: errorRate => Math.log(0.5 / errorRate),
  distance: epsilon => 2 * Math.abs(sinc(epsilon)) * Math.cos(Math.PI * (epsilon + 0.25)),
}
