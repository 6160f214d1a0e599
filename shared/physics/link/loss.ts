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

/** The offset at which the main lobe ends, in ε: the first null of the detector; null for `stated`. */
export function firstNullEpsilon(link: LossModel): number | null {
  switch (link.detector) {
    case 'quadrature': return link.rolloff === null ? 1 : 1 + link.rolloff
    case 'coherent': return 0.5
    case 'stated': return null
  }
}
