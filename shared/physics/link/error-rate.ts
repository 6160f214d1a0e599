import { erfc } from './erfc'

/**
 * Bit error rate of coherent BPSK, and of QPSK with Gray mapping, over white noise: P = ½ erfc √(Eb/N0).
 * Source: Proakis, Digital Communications; 1e-5 at 9.59 dB.
 */
export function bitErrorRate(ebN0Db: number): number {
  return erfc(Math.sqrt(10 ** (ebN0Db / 10))) / 2
}

/** The Eb/N0, dB, at which `bitErrorRate` is `errorRate`, to 1e-9 dB. Throws RangeError outside 1e-300 < errorRate < 0.5. */
export function requiredEbN0Db(errorRate: number): number {
  if (!(errorRate > 1e-300 && errorRate < 0.5)) throw new RangeError(`errorRate must lie above 0 and below 0.5, it is ${errorRate}`)
  let low = -400
  let high = 29
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2
    if (bitErrorRate(middle) > errorRate) low = middle
    else high = middle
  }
  return (low + high) / 2
}

/** The bit error rate that results when a link that just reaches `errorRate` loses `lossDb` of its signal. Between `errorRate` and 0.5. */
export function bitErrorRateAfterLoss(errorRate: number, lossDb: number): number {
  return bitErrorRate(requiredEbN0Db(errorRate) - lossDb)
}
