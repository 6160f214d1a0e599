import { chirpDriftPerPacketHz, chirpLimitHz } from '#shared/physics/link/chirp'
import { mainLobeEndEpsilon } from '#shared/physics/link/loss'
import type { Detector, LinkModel } from '#shared/physics/types'
import { formatHz } from '#shared/utils/format'

export { detectors } from '#shared/schemas/links'

/** What is read by each detector, in a few words. */
export const detectorFor: Readonly<Record<Detector, string>> = {
  quadrature: 'BPSK, QPSK, OQPSK and QAM in I/Q',
  coherent: 'BPSK on a real correlator',
  msk: 'MSK and GMSK',
  differential: 'DBPSK',
  fsk: 'non-coherent 2-FSK',
  multicarrier: 'OFDM',
  chirp: 'chirp spread spectrum',
  stated: 'FM discriminators and all else',
}

/** A limit in hertz and no loss over offset. */
export const hasCurve = (detector: Detector): boolean => detector !== 'stated' && detector !== 'chirp'
/** Those that go by an error rate: no null, but an offset from which no signal is strong enough. */
export const goesByErrorRate = (detector: Detector): boolean => detector === 'differential' || detector === 'fsk'

export type DetectorFigures = Pick<LinkModel, 'symbolRateHz' | 'rolloff' | 'bandwidthHz' | 'spreadingFactor'>

/** Offset at which nothing comes out of the detector any more or it fails, Hz; null where there is none or the symbol rate is missing. */
export function lobeEndHz({ detector, symbolRateHz, rolloff }: Pick<LinkModel, 'detector' | 'symbolRateHz' | 'rolloff'>): number | null {
  // Where the lobe ends does not hang on the error rate or Es/N0, which may be half typed.
  const epsilon = mainLobeEndEpsilon({ detector, symbolRateHz, rolloff, errorRate: 1e-5, esN0Db: 20 })
  return epsilon === null || !(symbolRateHz > 0) ? null : epsilon * symbolRateHz
}

/** What a detector is for and where it fails, with the number once the figures are there. */
export function detectorSentence(detector: Detector, figures: DetectorFigures): string {
  const at = lobeEndHz({ ...figures, detector })
  const number = at === null ? '' : `: ${formatHz(at)} Hz here`
  switch (detector) {
    case 'quadrature': return figures.rolloff === null
      ? `An I/Q correlator; the carrier’s phase does not matter. The first null lies at the symbol rate${number}.`
      : `An I/Q receiver with root-raised-cosine filters; the carrier’s phase does not matter. Nothing comes out past (1 + roll-off) × symbol rate${number}.`
    case 'coherent': return `A real correlator that counts on carrier phase zero at each symbol’s start. The first null lies at half the symbol rate${number}; nothing comes out at the whole symbol rate either.`
    case 'msk': return `Coherent MSK, and GMSK to good approximation; the symbol rate is the bit rate. The first null lies at the bit rate${number}.`
    case 'differential': return `Each bit is read against the one before, so the turn of phase between them counts too. The loss is the extra signal for the same bit error rate. It fails at a quarter of the symbol rate${number}.`
    case 'fsk': return `Two filters one symbol rate apart, the stronger wins. The loss is the extra signal for the same bit error rate. It fails half-way between the tones, at half the symbol rate${number}.`
    case 'multicarrier': return `The symbol rate is the spacing of the subcarriers, one over the useful symbol. Off frequency they hear each other, the more so the higher Es/N0 is. Nothing is left at one spacing${number}.`
    case 'chirp': return chirpSentence(figures)
    case 'stated': return 'A limit in hertz from the modem’s data sheet, for FM discriminators and whatever else has no such curve. No null is computed.'
  }
}

function chirpSentence({ bandwidthHz, spreadingFactor }: DetectorFigures): string {
  const isWide = bandwidthHz !== null && bandwidthHz > 0
  const limit = isWide ? `: ${formatHz(chirpLimitHz({ bandwidthHz, spreadingFactor }))} Hz here` : ''
  const drift = isWide && spreadingFactor !== null && spreadingFactor > 0 ? `: ${formatHz(chirpDriftPerPacketHz({ bandwidthHz, spreadingFactor }), 1)} Hz here, to be divided by the packet’s seconds for the largest drift` : ''
  return `Bears a quarter of its bandwidth${limit}, a limit and no curve. Within one packet it may drift by a third of bandwidth / 2^spreading factor${drift}.`
}
