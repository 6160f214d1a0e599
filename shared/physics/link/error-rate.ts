import type { Hz } from '../types'
import { requiredRatio } from './degradation'
import { differential } from './differential'
import { erfc } from './erfc'
import { fsk } from './fsk'
import { lossDb } from './loss'
import type { LossModel } from './loss'

/**
 * Bit error rate of coherent BPSK, and of QPSK with Gray mapping, over white noise: P = ½ erfc √(Eb/N0).
 * Source: Proakis, Digital Communications; 1e-5 at 9.59 dB.
 *
 * @card Error rate: share of bits that BPSK gets wrong over white noise.
 * @formula P = ½ erfc √(Eb/N0)
 * @source Proakis, Digital Communications
 * @units dB → share of bits
 * @frame none
 * @range coherent BPSK, Gray QPSK
 * @tolerance 1 % at 1e-5 (link/error-rate.test.ts)
 */
export function bitErrorRate(ebN0Db: number): number {
  return erfc(Math.sqrt(10 ** (ebN0Db / 10))) / 2
}

/**
 * The Eb/N0, dB, at which `bitErrorRate` is `errorRate`, to 1e-9 dB. Throws RangeError outside 1e-300 < errorRate < 0.5.
 *
 * @card Signal needed: Eb/N0 at which BPSK reaches an error rate.
 * @formula Eb/N0 with ½ erfc √(Eb/N0) = P, by bisection
 * @source Proakis, Digital Communications
 * @units share of bits → dB
 * @frame none
 * @range 1e-300 < P < 0.5
 * @tolerance 0.005 dB of handbook values (link/error-rate.test.ts)
 */
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

/**
 * The bit error rate that results when a link that just reaches `errorRate` loses `lossDb` of its signal. Between `errorRate` and 0.5.
 *
 * @card Error rate with loss: what becomes of it when part of the signal is lost.
 * @formula P = ½ erfc √(γ·10^(−loss/10)), γ the Eb/N0 that the link needs
 * @source Proakis, Digital Communications
 * @units share of bits, dB → share of bits
 * @frame none
 * @range loss ≥ 0 dB
 * @tolerance 5e-5 at 3 dB (link/error-rate.test.ts)
 */
export function bitErrorRateAfterLoss(errorRate: number, lossDb: number): number {
  return bitErrorRate(requiredEbN0Db(errorRate) - lossDb)
}

/**
 * The bit error rate that an offset in Hz of either sign makes of the link's own. `quadrature`, `coherent` and `msk`: coherent
 * bits (BPSK, Gray QPSK, MSK) that lose `lossDb`, ½ erfc √γ. `differential` and `fsk`: their exact error rate at the Eb/N0 that
 * the link needs without offset; `differential` turns bits over past ε = ¼ and then exceeds ½. Null for `multicarrier`, whose
 * subcarriers' modulation is not stated, and for `chirp` and `stated`, which have no curve.
 *
 * @card Error rate at an offset: what becomes of the link’s own.
 * @formula ½ erfc √γ with the loss; differential and FSK by their own error rate
 * @source each detector’s card
 * @units Hz → share of bits
 * @frame none
 * @range no figure for multicarrier, chirp and a stated limit
 * @tolerance 1e-9 (link/error-rate.test.ts)
 */
export function bitErrorRateAtOffset(link: LossModel, offsetHz: Hz): number | null {
  const { detector, errorRate } = link
  switch (detector) {
    case 'quadrature':
    case 'coherent':
    case 'msk': return bitErrorRateAfterLoss(errorRate, lossDb(link, offsetHz)!)
    case 'differential':
    case 'fsk': {
      const model = detector === 'fsk' ? fsk : differential
      return model.errorRate(requiredRatio(model, errorRate), Math.abs(offsetHz / link.symbolRateHz))
    }
    case 'multicarrier':
    case 'chirp':
    case 'stated': return null
  }
}
