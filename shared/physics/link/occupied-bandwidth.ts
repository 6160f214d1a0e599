import type { Hz, LinkModel } from '../types'

/**
 * Bandwidth that the receiver's filter must pass, Hz: (1 + α) × symbol rate, α the roll-off, 0 when none is stated; of a chirp
 * or a multicarrier signal its stated bandwidth, since a symbol's rate says nothing of that. Source: Nyquist pulses; common practice.
 *
 * @card Occupied bandwidth: what the receiver’s filter must pass.
 * @formula (1 + α)·Rs; of chirp and multicarrier as stated
 * @source Nyquist pulses; common practice
 * @units symbols/s, Hz → Hz
 * @frame none
 * @range 0 ≤ α ≤ 1
 * @tolerance exact (link/allowance.test.ts)
 */
export function occupiedBandwidthHz({ detector, symbolRateHz, rolloff, bandwidthHz }: Pick<LinkModel, 'symbolRateHz' | 'rolloff' | 'bandwidthHz'> & { readonly detector: string }): Hz {
  const isSpread = detector === 'chirp' || detector === 'multicarrier'
  return isSpread && bandwidthHz !== null ? bandwidthHz : (1 + (rolloff ?? 0)) * symbolRateHz
}
