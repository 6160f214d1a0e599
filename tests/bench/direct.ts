import { lookAt } from '#shared/physics/orbit/look'
import { createPropagator } from '#shared/physics/orbit/propagator'
import { siteStateTeme } from '#shared/physics/orbit/frames'
import type { MeanElements, Site, StateTeme } from '#shared/physics/types'
import { FROM_MS, link } from './fleet'

/** One way to do it plainly: SGP4 of satellite.js at every sample, nothing shared between stations, nothing interpolated. */

const C = 299_792_458
const SCAN_MS = 60_000

export interface DirectCount { propagations: number, passes: number, rows: number }
export type RowVisitor = (atMs: number, azimuthRad: number, elevationRad: number, rangeM: number, rangeRateMps: number, dopplerHz: number) => void

/** Downlink offset, Hz, from one state: light time bridged along a straight line, ends at their own speeds. */
function dopplerHz(state: StateTeme, site: Site, atMs: number, ut1MinusUtcS: number): number {
  const station = siteStateTeme(site, atMs, ut1MinusUtcS)
  const [x, y, z] = state.positionM
  const [vx, vy, vz] = state.velocityMps
  const pull = -398_600.8e9 / Math.hypot(x, y, z) ** 3
  const tau = Math.hypot(x - station.positionM[0], y - station.positionM[1], z - station.positionM[2]) / C
  const [tx, ty, tz] = [vx - tau * pull * x, vy - tau * pull * y, vz - tau * pull * z]
  const [dx, dy, dz] = [x - tau * vx - station.positionM[0], y - tau * vy - station.positionM[1], z - tau * vz - station.positionM[2]]
  const range = Math.hypot(dx, dy, dz)
  const [sx, sy, sz] = station.velocityMps
  const craft = (dx * tx + dy * ty + dz * tz) / range / C
  const ground = (dx * sx + dy * sy + dz * sz) / range / C
  const ratio = (1 + ground) / (1 + craft) * Math.sqrt((1 - (tx * tx + ty * ty + tz * tz) / C / C) / (1 - (sx * sx + sy * sy + sz * sz) / C / C))
  return link.carrierHz * (ratio - 1)
}

/** Passes of one spacecraft over one station by a scan each minute and bisection, then a row each second. */
export function directPair(elements: MeanElements, site: Site, toMs: number, ut1MinusUtcS: number, count: DirectCount, visit: RowVisitor): void {
  const made = createPropagator(elements)
  if (!made.ok) throw new Error(made.error)
  const stateAt = (atMs: number): StateTeme => {
    count.propagations++
    const state = made.propagator.at(atMs)
    if (!state.ok) throw new Error(state.error)
    return state
  }
  const above = (atMs: number): number => lookAt(stateAt(atMs), site, atMs, ut1MinusUtcS).elevationRad - site.minElevationRad
  const crossing = (fromMs: number, untilMs: number): number => {
    let [a, b] = [fromMs, untilMs]
    const rises = above(a) <= 0
    while (b - a > 1) {
      const middle = (a + b) / 2
      if (above(middle) > 0 === rises) b = middle
      else a = middle
    }
    return (a + b) / 2
  }
  const rows = (aosMs: number, losMs: number): void => {
    count.passes++
    const row = (atMs: number): void => {
      count.rows++
      const state = stateAt(atMs)
      const look = lookAt(state, site, atMs, ut1MinusUtcS)
      visit(atMs, look.azimuthRad, look.elevationRad, look.rangeM, look.rangeRateMps, dopplerHz(state, site, atMs, ut1MinusUtcS))
    }
    for (let atMs = aosMs; atMs < losMs; atMs += 1000) row(atMs)
    row(losMs)
  }

  let before = { ms: FROM_MS, value: above(FROM_MS) }
  let beforeThat = before
  let aosMs: number | null = before.value > 0 ? before.ms : null
  for (let ms = FROM_MS + SCAN_MS; ms <= toMs; ms += SCAN_MS) {
    const now = { ms, value: above(ms) }
    if (before.value <= 0 && now.value > 0) aosMs = crossing(before.ms, ms)
    else if (before.value > 0 && now.value <= 0) {
      rows(aosMs!, crossing(before.ms, ms))
      aosMs = null
    }
    else if (before.value <= 0 && before.value > beforeThat.value && before.value > now.value && before.value > -0.05) {
      // A pass shorter than the scan: climb to the top between the neighbours.
      let [a, b] = [beforeThat.ms, ms]
      while (b - a > 10) {
        const [left, right] = [a + (b - a) / 3, b - (b - a) / 3]
        if (above(left) < above(right)) a = left
        else b = right
      }
      if (above((a + b) / 2) > 0) rows(crossing(beforeThat.ms, (a + b) / 2), crossing((a + b) / 2, ms))
    }
    beforeThat = before
    before = now
  }
  if (aosMs !== null) rows(aosMs, toMs)
}
