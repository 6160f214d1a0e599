import type { Allowance, LimitedBy, LinkModel } from '../types'
import { amplitudeAt, firstNullEpsilon } from './loss'

/**
 * The largest residual a link bears, Hz: the smallest of
 * - the offset at which the loss reaches `permittedLossDb`, on the detector's main lobe (`loss`), or for detector `stated` the
 *   modem's data-sheet limit (`stated`);
 * - the loop's capture range (`captureRange`);
 * - what the receiver's filter leaves beside the signal: (1+α)·Rs/2 + Δf ≤ B/2, α the roll-off, 0 when none is stated (`filter`).
 *
 * A filter narrower than the signal leaves nothing: the allowance is 0, limited by `filter`, and every table on the link breaks.
 * `epsilon` is allowance·T. Throws RangeError when a figure it needs is missing or not positive.
 *
 * @card Allowance: the largest residual that a link bears.
 * @formula least of Δf at the permitted loss, capture range, B/2 − (1+α)·Rs/2, or the stated limit
 * @source loss inverted on the main lobe; filter: common practice
 * @units dB, Hz, symbols/s → Hz
 * @frame none
 * @range figures above 0; 0 ≤ α ≤ 1
 * @tolerance 1e-6 symbol rates of tables (link/allowance.test.ts)
 */
export function allowanceOf(link: LinkModel): Allowance {
  positive('symbolRateHz', link.symbolRateHz)
  if (link.rolloff !== null && !(link.rolloff >= 0 && link.rolloff <= 1)) {
    throw new RangeError(`rolloff must lie between 0 and 1, it is ${link.rolloff}`)
  }
  const limits: [LimitedBy, number][] = [link.detector === 'stated' ? ['stated', statedLimitHz(link)] : ['loss', lossLimitHz(link)]]
  if (link.captureRangeHz !== null) limits.push(['captureRange', positive('captureRangeHz', link.captureRangeHz)])
  if (link.filterBandwidthHz !== null) {
    const room = positive('filterBandwidthHz', link.filterBandwidthHz) / 2 - (1 + (link.rolloff ?? 0)) * link.symbolRateHz / 2
    limits.push(['filter', Math.max(0, room)])
  }
  const [limitedBy, allowanceHz] = limits.reduce((least, next) => next[1] < least[1] ? next : least)
  const symbolTimeS = 1 / link.symbolRateHz
  return { symbolTimeS, epsilon: allowanceHz * symbolTimeS, allowanceHz, limitedBy }
}

function statedLimitHz(link: LinkModel): number {
  if (link.limitHz === null) throw new RangeError('detector "stated" needs limitHz: the largest offset on the modem\'s data sheet, Hz')
  return positive('limitHz', link.limitHz)
}

/** Inverts the loss by bisection; the amplitude falls all along the main lobe. Good to 1e-15 in ε. */
function lossLimitHz(link: LinkModel): number {
  const permitted = 10 ** (-positive('permittedLossDb', link.permittedLossDb) / 20)
  let inside = 0
  let outside = firstNullEpsilon(link) ?? 0
  for (let i = 0; i < 52; i++) {
    const middle = (inside + outside) / 2
    if ((amplitudeAt(link, middle) ?? 0) >= permitted) inside = middle
    else outside = middle
  }
  return inside * link.symbolRateHz
}

function positive(name: string, value: number): number {
  if (!(value > 0 && Number.isFinite(value))) throw new RangeError(`${name} must be a positive number, it is ${value}`)
  return value
}
