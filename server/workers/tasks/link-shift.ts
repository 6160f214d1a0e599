import { neededOverCarrierMinusOne } from '#shared/physics/doppler/ratio'
import { twoWayOf } from '#shared/physics/doppler/two-way'
import type { Direction, Ephemeris, PredictedPass, Site, Span, UtcMs } from '#shared/physics/types'

/** A coherent link hears of a set twice: in its own shift, and in that of the uplink it is made from. */
export interface ComparedLink { readonly id: string, readonly direction: Direction, readonly carrierHz: number, readonly isCoherent: boolean, readonly allowanceHz: number }
type Way = Direction | 'two-way'

/** Spacing at which two curves are held against each other: their difference turns slowly even overhead. */
const STEP_MS = 2000
const MOST_STEPS = 1000

export const wayOf = (link: ComparedLink): Way => link.isCoherent ? 'two-way' : link.direction

/** Needed frequency over the carrier, minus one. */
export function shareAt({ stateAt }: Ephemeris, site: Site, ut1MinusUtcS: number, way: Way, utcMs: UtcMs): number {
  const path = { stateAt, site, ut1MinusUtcS }
  if (way !== 'two-way') return neededOverCarrierMinusOne(path, way, utcMs)
  const { upMinusOne, downMinusOne } = twoWayOf(path, utcMs)
  return upMinusOne + downMinusOne + upMinusOne * downMinusOne
}

/** The span in which a pass and its former self are held against each other; null where either set has ended. */
export function commonSpan(now: PredictedPass, before: PredictedPass, mine: Ephemeris, old: Ephemeris): Span | null {
  // Moved by more than its own length a pass has no span in common with its former self; then its own counts.
  const meets = Math.max(now.aosMs, before.aosMs) < Math.min(now.losMs, before.losMs)
  const fromMs = Math.max(meets ? Math.max(now.aosMs, before.aosMs) : now.aosMs, mine.fromMs, old.fromMs)
  const toMs = Math.min(meets ? Math.min(now.losMs, before.losMs) : now.losMs, mine.toMs, old.toMs)
  return toMs >= fromMs ? { fromMs, toMs } : null
}

/** Largest |new − old| of the needed frequency over the span, Hz, for each link. */
export function shiftsOfLinks({ fromMs, toMs }: Span, site: Site, mine: Ephemeris, old: Ephemeris, links: readonly ComparedLink[], ut1MinusUtcS: number): { id: string, worstShiftHz: number }[] {
  const steps = Math.max(1, Math.min(MOST_STEPS, Math.ceil((toMs - fromMs) / STEP_MS)))
  const worst = new Map<Way, number>()
  for (const way of new Set(links.map(wayOf))) {
    let largest = 0
    for (let i = 0; i <= steps; i++) {
      const utcMs = fromMs + (toMs - fromMs) * i / steps
      largest = Math.max(largest, Math.abs(shareAt(mine, site, ut1MinusUtcS, way, utcMs) - shareAt(old, site, ut1MinusUtcS, way, utcMs)))
    }
    worst.set(way, largest)
  }
  return links.map(link => ({ id: link.id, worstShiftHz: link.carrierHz * worst.get(wayOf(link))! }))
}

export interface CurveSample { readonly atMs: UtcMs, readonly oldHz: number, readonly newHz: number }
const CURVE_STEPS = 60

/** The old S and the new S of one link over a span. */
export function curvesOf({ fromMs, toMs }: Span, site: Site, mine: Ephemeris, old: Ephemeris, link: ComparedLink, ut1MinusUtcS: number): CurveSample[] {
  const hz = (ephemeris: Ephemeris, utcMs: UtcMs) => Number((link.carrierHz * shareAt(ephemeris, site, ut1MinusUtcS, wayOf(link), utcMs)).toFixed(2))
  return Array.from({ length: CURVE_STEPS + 1 }, (_, i) => {
    const atMs = fromMs + (toMs - fromMs) * i / CURVE_STEPS
    return { atMs: Math.round(atMs), oldHz: hz(old, atMs), newHz: hz(mine, atMs) }
  })
}
