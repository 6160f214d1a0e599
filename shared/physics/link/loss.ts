import type { Hz, LinkModel } from '../types'
import { overlap } from './root-raised-cosine'
import { sinc } from './sinc'

/** At a null of the detector nothing comes out; JSON has no Infinity, so the loss is stated as this, dB. */
export const LOSS_CAP_DB = 300

/** What the loss depends on; every `LinkModel` is one. */
export type LossModel = Pick<LinkModel, 'detector' | 'symbolRateHz' | 'rolloff'>

/**
 * Output amplitude of the link's matched filter at ε = Δf·T, relative to no offset; null for `stated`, which has no curve.
 * - quadrature: |sinc ε| (I/Q correlator, rectangular pulses); with roll-off α the overlap of two root-raised-cosine spectra.
 * - coherent: |sinc 2ε| (real correlator, carrier phase zero at each symbol's start).
 *
 * @card Detector’s answer: output of the matched filter at an offset, by detector.
 * @formula |sinc ε| in quadrature, with roll-off ∫G(f)G(f−ε)df; |sinc 2ε| coherently; ε = Δf·T
 * @source correlator’s response; Harris 1978; common practice
 * @units symbol rates → dimensionless
 * @frame none
 * @range every offset; no curve for a stated limit
 * @tolerance 0.0005 dB (link/loss.test.ts)
 */
export function amplitudeAt(link: LossModel, epsilon: number): number | null {
  const e = Math.abs(epsilon)
  switch (link.detector) {
    case 'quadrature': return link.rolloff === null ? Math.abs(sinc(e)) : overlap(e, link.rolloff)
    case 'coherent': return Math.abs(sinc(2 * e))
    case 'stated': return null
  }
}

/**
 * Loss at the matched filter's output, dB, positive, for a frequency offset in Hz of either sign: −20 log10 of `amplitudeAt`.
 * Between 0 and `LOSS_CAP_DB`, the value at a null and beyond the reach of a roll-off filter. Null for detector `stated`.
 * Source: the sinc response of a correlator (Harris 1978 knows its 3.92 dB at half a bin as scalloping loss).
 *
 * @card Loss at an offset: what a residual costs at the matched filter’s output.
 * @formula −20 log10 of the detector’s answer
 * @source correlator’s response; 3.92 dB at half a symbol rate: Harris, Proc. IEEE 66 (1978) 51
 * @units Hz → dB
 * @frame none
 * @range 0 to 300 dB, at which a null is stated
 * @tolerance 0.0005 dB of tables (link/loss.test.ts)
 */
export function lossDb(link: LossModel, offsetHz: Hz): number | null {
  const amplitude = amplitudeAt(link, offsetHz / link.symbolRateHz)
  return amplitude === null ? null : amplitudeToLossDb(amplitude)
}

/** −20 log10 of an amplitude, between 0 and the cap. A sine at a multiple of π leaves 1e-17: that is a null too. */
function amplitudeToLossDb(amplitude: number): number {
  if (amplitude <= 1e-15) return LOSS_CAP_DB
  return Math.max(0, -20 * Math.log10(amplitude))
}

/**
 * The offset at which the main lobe ends, in ε: the first null of the detector; null for `stated`.
 *
 * @card First null: the offset at which the main lobe ends.
 * @formula 1 in quadrature, 1 + α with roll-off, ½ coherently
 * @source correlator’s response; common practice
 * @units roll-off → symbol rates
 * @frame none
 * @range no null for a stated limit
 * @tolerance exact: the loss is 300 dB there (link/loss.test.ts)
 */
export function firstNullEpsilon(link: LossModel): number | null {
  switch (link.detector) {
    case 'quadrature': return link.rolloff === null ? 1 : 1 + link.rolloff
    case 'coherent': return 0.5
    case 'stated': return null
  }
}
