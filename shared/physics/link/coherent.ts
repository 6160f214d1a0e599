import { amplitudeCurve } from './curve'
import { sinc } from './sinc'

/**
 * Real correlator with the carrier's phase zero at each symbol's start: ∫cos(2πΔf·t) over a symbol, |sinc 2ε|. First null at
 * ε = ½, nothing at ε = 1 either. Source: common practice.
 *
 * @card Coherent: loss of a real correlator that counts on the carrier’s phase.
 * @formula −20 log10 |sinc 2ε|
 * @source common practice
 * @units symbol rates → dB
 * @frame none
 * @range to the first null at ½
 * @tolerance 0.0005 dB of tables (link/loss.test.ts)
 */
export const coherentCurve = amplitudeCurve(0.5, epsilon => Math.abs(sinc(2 * epsilon)))
