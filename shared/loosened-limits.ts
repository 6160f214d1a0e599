import { allowanceOf } from './physics/link/allowance'
import type { LinkModel } from './physics/types'

/** What a link may be loosened in. */
export type LimitedLink = LinkModel & { readonly bandLowHz: number, readonly bandHighHz: number, readonly minElevationDeg: number }

/** Limits that bind by being small; null is no limit at all. */
const ceilings = {
  permittedLossDb: 'permitted loss, dB',
  captureRangeHz: 'capture range, Hz',
  filterBandwidthHz: 'filter bandwidth, Hz',
  driftLimitHzPerS: 'drift limit, Hz/s',
  jumpLimitHz: 'jump limit, Hz',
  bandHighHz: 'upper edge of the band, Hz',
} as const

/**
 * In words, which limits a change loosens, so that what broke before may pass now: a larger ceiling, a wider band, a
 * larger allowance by whatever field, another minimum elevation (lower: worked where it was not; higher: what lies
 * below is no longer checked). Empty when it only tightens. The server asks for a reason by it, the form shows it.
 */
export function loosenedLimits(before: LimitedLink, after: LimitedLink): string[] {
  const said: string[] = []
  const say = (what: string, from: number | null, to: number | null) => said.push(`${what}: ${from ?? 'none'} → ${to ?? 'none'}`)
  for (const [field, what] of Object.entries(ceilings) as [keyof typeof ceilings, string][]) {
    if ((after[field] ?? Infinity) > (before[field] ?? Infinity)) say(what, before[field], after[field])
  }
  if (after.bandLowHz < before.bandLowHz) say('lower edge of the band, Hz', before.bandLowHz, after.bandLowHz)
  if (after.minElevationDeg !== before.minElevationDeg) say('minimum elevation, °', before.minElevationDeg, after.minElevationDeg)
  if (before.detector === 'stated' && after.detector === 'stated' && after.limitHz! > before.limitHz!) say('stated limit, Hz', before.limitHz, after.limitHz)
  const [allowanceBefore, allowanceAfter] = [allowanceOf(before).allowanceHz, allowanceOf(after).allowanceHz]
  if (allowanceAfter > allowanceBefore * (1 + 1e-9)) say('allowance, Hz', rounded(allowanceBefore), rounded(allowanceAfter))
  return said
}

const rounded = (hz: number) => Number(hz.toPrecision(6))
