import type { Span } from '../types'
import type { SlopeBounds } from './lines'

/** Spacing of the instants at which the curve's rate is asked. */
const NODE_MS = 2000
/** Room for the second difference changing within a node's spacing. */
const CURVATURE_SHARE = 1.5 / 8

/**
 * Slopes within a loop's drift limit: from max ḟ − limit to min ḟ + limit over the workable instants of a stretch. ḟ is asked every
 * 2 s; between two such instants a curve strays from its ends by an eighth of its second difference, and half as much again is allowed.
 *
 * @card Slopes that a loop follows: least and greatest over a stretch.
 * @formula max ḟ − limit ≤ s ≤ min ḟ + limit over a row
 * @source mechanics
 * @units UTC ms, Hz/s → Hz/s
 * @frame the radio’s dial
 * @range ḟ every 2 s, its bend allowed for
 * @tolerance the checker finds no drift beyond the limit (predict/ramps.test.ts)
 */
export function slopeBounds(rateHzPerS: (utcMs: number) => number, parts: readonly Span[], anchorMs: number, limitHzPerS: number): SlopeBounds {
  const pieces: { from: number, to: number, least: number, most: number }[] = []
  for (const part of parts) {
    const count = Math.max(1, Math.ceil((part.toMs - part.fromMs) / NODE_MS))
    const time = Array.from({ length: count + 1 }, (_, i) => part.fromMs + (part.toMs - part.fromMs) * i / count)
    const rates = time.map(rateHzPerS)
    const bend = (i: number) => i <= 0 || i >= count ? 0 : Math.abs(rates[i - 1]! - 2 * rates[i]! + rates[i + 1]!)
    for (let i = 1; i <= count; i++) {
      const room = CURVATURE_SHARE * Math.max(bend(i - 1), bend(i))
      pieces.push({
        from: time[i - 1]! - anchorMs, to: time[i]! - anchorMs,
        least: Math.min(rates[i - 1]!, rates[i]!) - room, most: Math.max(rates[i - 1]!, rates[i]!) + room,
      })
    }
  }
  return (from, to) => {
    let [least, most] = [-Infinity, Infinity]
    for (const piece of pieces) {
      if (piece.to < from || piece.from > to) continue
      least = Math.max(least, piece.most - limitHzPerS)
      most = Math.min(most, piece.least + limitHzPerS)
    }
    return [least, most]
  }
}
