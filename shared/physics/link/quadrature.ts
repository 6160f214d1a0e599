import { amplitudeCurve } from './curve'
import type { LossCurve } from './curve'
import { overlap } from './root-raised-cosine'
import { sinc } from './sinc'

/**
 * I/Q correlator. Rectangular pulses: amplitude |sinc ε|, first null at ε = 1. Root-raised-cosine filters with roll-off α: the
 * overlap of two spectra, nothing from ε = 1 + α on.
 * Source: response of a correlator (Harris 1978 knows its 3.92 dB at half a bin as scalloping loss).
 *
 * @card Quadrature: loss of an I/Q correlator.
 * @formula −20 log10 |sinc ε|; with roll-off −20 log10 ∫G(f)G(f−ε)df
 * @source correlator’s response; 3.92 dB at half a symbol rate: Harris, Proc. IEEE 66 (1978) 51
 * @units roll-off; symbol rates → dB
 * @frame none
 * @range 0 ≤ α ≤ 1; to the first null at 1, or 1 + α
 * @tolerance 0.0005 dB of tables (link/loss.test.ts)
 */
export function quadratureCurve(rolloff: number | null): LossCurve {
  return rolloff === null
    ? amplitudeCurve(1, epsilon => Math.abs(sinc(epsilon)))
    : amplitudeCurve(1 + rolloff, epsilon => overlap(epsilon, rolloff))
}
