import { allowanceOf } from '#shared/physics/link/allowance'
import { occupiedBandwidthHz } from '#shared/physics/link/occupied-bandwidth'
import type { Allowance, LimitedBy, LinkModel } from '#shared/physics/types'
import { formatHz } from '#shared/utils/format'

type Bearing = Pick<LinkModel, 'symbolRateHz' | 'detector' | 'permittedLossDb' | 'captureRangeHz' | 'filterBandwidthHz' | 'rolloff' | 'limitHz' | 'errorRate' | 'esN0Db' | 'bandwidthHz' | 'spreadingFactor'>

/** Small allowances are read to a tenth of a hertz. */
export const allowanceText = (hz: number): string => formatHz(hz, hz < 100 ? 1 : 0)

const byWhat: Record<LimitedBy, string> = { loss: 'by its loss', captureRange: 'by its capture range', filter: 'by the receiver’s filter', stated: 'by its stated limit' }
/** A chirp's limit is computed from its bandwidth, so with its detector it is called that. */
export function limitedByWords(limitedBy: string, detector?: string): string {
  if (limitedBy === 'stated' && detector === 'chirp') return 'by a quarter of its bandwidth'
  return byWhat[limitedBy as LimitedBy] ?? limitedBy
}

/** "1 786 Hz, by its loss". */
export const bearsText = (link: { allowanceHz: number, limitedBy: string, detector?: string }): string => `${allowanceText(link.allowanceHz)} Hz, ${limitedByWords(link.limitedBy, link.detector)}`

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
  const alone = allowanceAsTyped({ ...link, captureRangeHz: null, filterBandwidthHz: null })
  if (!(link.symbolRateHz > 0)) return []
  const beside = (limitedBy: LimitedBy, hz: number): Allowance => ({ symbolTimeS: 1 / link.symbolRateHz, epsilon: hz / link.symbolRateHz, allowanceHz: hz, limitedBy })
  const limits = alone ? [alone] : []
  if (link.captureRangeHz !== null) limits.push(beside('captureRange', link.captureRangeHz))
  if (link.filterBandwidthHz !== null) limits.push(beside('filter', Math.max(0, (link.filterBandwidthHz - occupiedBandwidthHz(link)) / 2)))
  return limits.sort((a, b) => a.allowanceHz - b.allowanceHz)
}
