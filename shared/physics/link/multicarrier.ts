import { LOSS_CAP_DB } from './curve'
import type { LossCurve } from './curve'
import { sinc } from './sinc'

/**
 * Orthogonal subcarriers, T the useful symbol, so ε is the offset over their spacing. Each loses to s = sinc²ε and hears the
 * others as noise of power 1 − s: with γs = Es/N0 the loss is 10 log10[(1 + γs(1 − s))/s] dB. It is relative to `esN0Db`, and
 * what is left counts as white noise. Nothing is left at ε = 1, where a subcarrier has become its neighbour.
 * Source: Pollet, Van Bladel, Moeneclaey 1995, whose (10/(3 ln 10))(πε)²γs is the form for small ε and small loss.
 * @throws RangeError when esN0Db is not a number
 *
 * @card Multicarrier: loss of a subcarrier to an offset, its neighbours’ noise included.
 * @formula 10 log10[(1 + γs(1 − s))/s], s = sinc²ε
 * @source Pollet, Van Bladel, Moeneclaey 1995 for small ε
 * @units dB; subcarrier spacings → dB
 * @frame none
 * @range to ε = 1
 * @tolerance 0.0005 dB at 0.02 and 20 dB (link/detectors.test.ts)
 */
export function multicarrierCurve(esN0Db: number): LossCurve {
  if (!Number.isFinite(esN0Db)) throw new RangeError(`esN0Db must be a number, it is ${esN0Db}`)
  const esN0 = 10 ** (esN0Db / 10)
  const lossDb = (epsilon: number) => {
    const kept = sinc(epsilon) ** 2
    return kept <= 1e-30 ? LOSS_CAP_DB : Math.min(LOSS_CAP_DB, Math.max(0, 10 * Math.log10((1 + esN0 * (1 - kept)) / kept)))
  }
  return { endEpsilon: 1, lossDb, isWithin: (epsilon, permittedDb) => lossDb(epsilon) <= permittedDb }
}
