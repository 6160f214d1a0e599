import type { Detector } from '#shared/physics/types'

export interface Proposal {
  /** As modulations are usually written. */
  readonly modulations: string
  readonly detector: Detector
  readonly reason: string
}

interface Rule extends Proposal { readonly reads: RegExp }

/** The first rule that reads a modulation decides; what is more particular stands first. */
const rules: readonly Rule[] = [
  { modulations: 'OQPSK', detector: 'quadrature', reason: 'each arm holds a symbol for two bits: T = 2 / bit rate, so the symbol rate is half the bit rate.', reads: /O-?QPSK|OFFSET/ },
  { modulations: 'GMSK, MSK', detector: 'msk', reason: 'half-sine pulses over two bits; the symbol rate is the bit rate.', reads: /MSK/ },
  { modulations: 'DBPSK', detector: 'differential', reason: 'each bit is read against the one before, and an offset turns the phase between them.', reads: /\bD-?B?PSK|DIFFERENTIAL/ },
  { modulations: 'DQPSK', detector: 'stated', reason: 'four phases against the symbol before have no curve here: take the modem’s limit.', reads: /\bD-?(Q|8-?)PSK/ },
  { modulations: 'OFDM', detector: 'multicarrier', reason: 'the subcarriers lose their distance; type their spacing as the symbol rate.', reads: /OFDM|MULTI-?CARRIER/ },
  { modulations: 'Chirp spread spectrum', detector: 'chirp', reason: 'it bears a quarter of its bandwidth, whatever the symbol rate.', reads: /CHIRP|\bCSS\b/ },
  { modulations: 'FM, GFSK, AFSK, 4-FSK', detector: 'stated', reason: 'an FM discriminator has no such curve: take the limit on the modem’s data sheet.', reads: /\bFM\b|DISCRIMINATOR|G-?FSK|A-?FSK|(4|8|16|\bM)-?C?P?FSK/ },
  { modulations: 'Non-coherent 2-FSK', detector: 'fsk', reason: 'if two filters one symbol rate apart read it; behind an FM discriminator take stated.', reads: /FSK/ },
  { modulations: 'BPSK, QPSK, 8PSK, QAM', detector: 'quadrature', reason: 'an I/Q receiver does not mind the carrier’s phase; take coherent if yours is a real correlator locked to it.', reads: /PSK|QAM|\bASK\b/ },
]

/** Which detector usually reads a modulation, and why; null for what is not known. */
export function proposalFor(modulation: string): Proposal | null {
  const written = modulation.toUpperCase()
  return rules.find(rule => rule.reads.test(written)) ?? null
}

/** Every modulation with its detector, for those who look for theirs. */
export const proposals: readonly Proposal[] = rules

/** Whether a detector is one that is usual for the modulation: coherent reads what quadrature reads, a data sheet goes for all. */
export function isUsual({ detector }: Proposal, chosen: Detector): boolean {
  return chosen === detector || (detector === 'quadrature' && chosen === 'coherent')
}
