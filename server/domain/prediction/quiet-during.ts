import type { Span, UtcMs } from '#shared/physics/types'

export interface PassTimes { readonly aosMs: UtcMs, readonly losMs: UtcMs }

/**
 * The spans that touch a pass or the lead of its first row. Their beginnings stay whole: a first row that gives way to a
 * span over AOS has to take effect before the span, not before the pass.
 */
export function quietDuring(quiet: readonly Span[], { aosMs, losMs }: PassTimes, firstRowLeadMs: number): Span[] {
  return quiet.filter(({ fromMs, toMs }) => toMs >= aosMs - firstRowLeadMs && fromMs <= losMs)
}
