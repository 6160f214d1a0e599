import { allowanceOf } from '#shared/physics/link/allowance'
import { firstNullEpsilon } from '#shared/physics/link/loss'
import type { Allowance, Detector, LimitedBy, LinkModel } from '#shared/physics/types'
import { formatHz } from '#shared/utils/format'

type Bearing = Pick<LinkModel, 'symbolRateHz' | 'detector' | 'permittedLossDb' | 'captureRangeHz' | 'filterBandwidthHz' | 'rolloff' | 'limitHz'>

/** Small allowances are read to a tenth of a hertz. */
export const allowanceText = (hz: number): string => formatHz(hz, hz < 100 ? 1 : 0)

const byWhat: Record<LimitedBy, string> = { loss: 'by its loss', captureRange: 'by its capture range', filter: 'by the receiver’s filter', stated: 'by its stated limit' }
export const limitedByWords = (limitedBy: string): string => byWhat[limitedBy as LimitedBy] ?? limitedBy

/** "1 786 Hz, by its loss". */
export const bearsText = (link: { allowanceHz: number, limitedBy: string }): string => `${allowanceText(link.allowanceHz)} Hz, ${limitedByWords(link.limitedBy)}`

/** What a link bears as typed so far, or null while a figure is missing or impossible. */
export function allowanceAsTyped(link: Bearing): Allowance | null {
  try {
    return allowanceOf(link as LinkModel)
  }
  catch (error) {
    if (error instanceof RangeError) return null
    throw error
  }
}

/** Every limit that the link has, smallest first: the first is its allowance. */
export function limitsAsTyped(link: Bearing): Allowance[] {
  const alone = { ...link, captureRangeHz: null, filterBandwidthHz: null }
  const each = [allowanceAsTyped(alone)]
  for (const field of ['captureRangeHz', 'filterBandwidthHz'] as const) {
    if (link[field] === null) continue
    // Beside a limit too large to bind, the one in question shows.
    each.push(allowanceAsTyped({ ...alone, detector: 'stated', limitHz: Number.MAX_VALUE, [field]: link[field] }))
  }
  return each.filter(limit => limit !== null).sort((a, b) => a.allowanceHz - b.allowanceHz)
}

/** Offset at which nothing comes out of the detector any more, Hz; null where there is none or the symbol rate is missing. */
export function nullHz(link: Pick<LinkModel, 'detector' | 'symbolRateHz' | 'rolloff'>): number | null {
  const epsilon = firstNullEpsilon(link)
  return epsilon === null || !(link.symbolRateHz > 0) ? null : epsilon * link.symbolRateHz
}

/** What a detector is and where its null lies, with the number once the symbol rate is there. */
export function detectorSentence(detector: Detector, symbolRateHz: number | null, rolloff: number | null): string {
  const at = nullHz({ detector, symbolRateHz: symbolRateHz ?? 0, rolloff })
  const number = at === null ? '' : `: ${formatHz(at)} Hz here`
  switch (detector) {
    case 'quadrature': return rolloff === null
      ? `An I/Q correlator; the carrier’s phase does not matter. The first null lies at the symbol rate${number}.`
      : `An I/Q receiver with root-raised-cosine filters; the carrier’s phase does not matter. Nothing comes out past (1 + roll-off) × symbol rate${number}.`
    case 'coherent': return `A real correlator that counts on carrier phase zero at each symbol’s start. The first null lies at half the symbol rate${number}; nothing comes out at the whole symbol rate either.`
    case 'stated': return 'A limit in hertz from the modem’s data sheet, for FM discriminators and whatever else has no such curve. No null is computed.'
  }
}
