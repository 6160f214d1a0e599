import type { Hz, LinkModel } from '../types'
import { coherentCurve } from './coherent'
import type { LossCurve } from './curve'
import { degradationCurve } from './degradation'
import { differential } from './differential'
import { fsk } from './fsk'
import { mskCurve } from './msk'
import { multicarrierCurve } from './multicarrier'
import { quadratureCurve } from './quadrature'

export { LOSS_CAP_DB } from './curve'

/** What the loss depends on; every `LinkModel` is one. */
export type LossModel = Pick<LinkModel, 'detector' | 'symbolRateHz' | 'rolloff' | 'errorRate' | 'esN0Db'>

/**
 * Loss over offset of the link's detector; null for `chirp` and `stated`, which have a limit and no curve. RangeError as the detectors say.
 *
 * @card Detector’s curve: loss over offset of the link’s detector.
 * @formula by detector: quadrature, coherent, MSK, differential, FSK, multicarrier
 * @source each detector’s card
 * @units symbol rates → dB
 * @frame none
 * @range no curve for chirp and a stated limit
 * @tolerance 0.0005 dB of tables (link/loss.test.ts)
 */
export function lossCurveOf({ detector, rolloff, errorRate, esN0Db }: LossModel): LossCurve | null {
  switch (detector) {
    case 'quadrature': return quadratureCurve(rolloff)
    case 'coherent': return coherentCurve
    case 'msk': return mskCurve
    case 'differential': return degradationCurve(differential, errorRate)
    case 'fsk': return degradationCurve(fsk, errorRate)
    case 'multicarrier': return multicarrierCurve(esN0Db)
    case 'chirp':
    case 'stated': return null
  }
}

/**
 * Loss to a frequency offset in Hz of either sign, dB, between 0 and `LOSS_CAP_DB`, the value at a null, beyond the reach of a
 * roll-off filter and where a detector fails. Null for detectors `chirp` and `stated`. Formula and source: each detector's own file.
 *
 * @card Loss at an offset: what a residual costs the link.
 * @formula the detector’s curve at ε = |Δf|/Rs
 * @source each detector’s card
 * @units Hz → dB
 * @frame none
 * @range 0 to 300 dB, at which a null or failure is stated
 * @tolerance 0.0005 dB of tables (link/loss.test.ts)
 */
export function lossDb(link: LossModel, offsetHz: Hz): number | null {
  return lossCurveOf(link)?.lossDb(Math.abs(offsetHz / link.symbolRateHz)) ?? null
}

/**
 * The offset, ε, at which the main lobe ends: the detector's first null, or where it fails; null where there is no curve.
 *
 * @card End of the main lobe: first null of the detector, or where it fails.
 * @formula quadrature 1 or 1 + α, coherent ½, MSK 1, differential ¼, FSK ½, multicarrier 1
 * @source each detector’s card
 * @units roll-off → symbol rates
 * @frame none
 * @range none for chirp and a stated limit
 * @tolerance exact: the loss is 300 dB there (link/detectors.test.ts)
 */
export function mainLobeEndEpsilon(link: LossModel): number | null {
  return lossCurveOf(link)?.endEpsilon ?? null
}
