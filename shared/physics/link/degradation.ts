import { LOSS_CAP_DB } from './curve'
import type { LossCurve } from './curve'

/** A detector whose loss is found from its error rate. */
export interface ErrorRateModel {
  /** Offset, ε, from which no signal is strong enough any more. */
  readonly failsAtEpsilon: number
  /** Bit error rate at γ = Eb/N0 (a ratio) and ε ≥ 0. */
  errorRate(ebN0: number, epsilon: number): number
  /** Eb/N0 (a ratio) at which the error rate without offset is this. */
  requiredEbN0(errorRate: number): number
  /** Difference b − a of the two envelopes at γ = 1; it grows with √γ, and the error rate is at most ½e^(−(b−a)²/2). */
  distance(epsilon: number): number
}

/**
 * Curve of the degradation: the extra Eb/N0, dB, that gives the link's error rate in spite of the offset. Found by root finding
 * to 1e-10 dB; capped at `LOSS_CAP_DB`, which it reaches where the detector fails.
 * @throws RangeError unless 0 < errorRate < 0.5
 *
 * @card Degradation: extra Eb/N0 for the same error rate in spite of an offset.
 * @formula 10 log10(γ/γ₀) with P(γ, ε) = P(γ₀, 0), by regula falsi
 * @source definition; Illinois rule: Dowell and Jarratt 1971
 * @units share of bits; symbol rates → dB
 * @frame none
 * @range 0 < P < ½; 300 dB where the detector fails
 * @tolerance 0.001 dB (link/detectors.test.ts)
 */
export function degradationCurve(model: ErrorRateModel, errorRate: number): LossCurve {
  const base = requiredRatio(model, errorRate)
  const rateAfter = (extraDb: number, epsilon: number) => model.errorRate(base * 10 ** (extraDb / 10), epsilon)
  return {
    endEpsilon: model.failsAtEpsilon,
    lossDb(epsilon) {
      const distance = model.distance(epsilon)
      if (epsilon >= model.failsAtEpsilon || distance <= 0) return LOSS_CAP_DB
      // With so much the bound ½e^(−(b−a)²/2) is the error rate already.
      const enoughDb = 10 * Math.log10(2 * Math.log(0.5 / errorRate) / distance ** 2 / base)
      return enoughDb >= LOSS_CAP_DB ? LOSS_CAP_DB : solve(extraDb => Math.log(rateAfter(extraDb, epsilon) / errorRate), 0, Math.max(0, enoughDb))
    },
    isWithin: (epsilon, permittedDb) => epsilon < model.failsAtEpsilon && rateAfter(permittedDb, epsilon) <= errorRate,
  }
}

/**
 * Eb/N0, a ratio, that gives the error rate without an offset.
 *
 * @card Signal needed without offset: Eb/N0 of a detector at an error rate.
 * @formula differential ln(1/2P), FSK 2 ln(1/2P)
 * @source Proakis, Digital Communications
 * @units share of bits → ratio
 * @frame none
 * @range 0 < P < ½
 * @tolerance 0.0005 dB at 1e-5 (link/error-rate.test.ts)
 */
export function requiredRatio(model: ErrorRateModel, errorRate: number): number {
  if (!(errorRate > 0 && errorRate < 0.5)) throw new RangeError(`errorRate must lie above 0 and below 0.5, it is ${errorRate}`)
  return model.requiredEbN0(errorRate)
}

/** Root of a falling function between two bounds, to 1e-10: regula falsi, the end that stays twice counted half (Illinois). */
function solve(fn: (x: number) => number, low: number, high: number): number {
  let [atLow, atHigh] = [fn(low), fn(high)]
  if (!(atLow > 0)) return low
  if (!(atHigh < 0)) return high
  let moved: 'low' | 'high' | null = null
  for (let i = 0; i < 100 && high - low > 1e-10; i++) {
    const x = (low * atHigh - high * atLow) / (atHigh - atLow)
    const at = fn(x)
    if (Math.abs(at) < 1e-13) return x
    if (at > 0) {
      [low, atLow] = [x, at]
      if (moved === 'low') atHigh /= 2
      moved = 'low'
    }
    else {
      [high, atHigh] = [x, at]
      if (moved === 'high') atLow /= 2
      moved = 'high'
    }
  }
  return (low + high) / 2
}
