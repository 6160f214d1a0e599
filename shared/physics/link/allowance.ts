import type { Allowance, LimitedBy, LinkModel } from '../types'
import { chirpLimitHz } from './chirp'
import { lossCurveOf } from './loss'
import { occupiedBandwidthHz } from './occupied-bandwidth'
import { positive } from './positive'

/**
 * The largest residual a link bears, Hz: the smallest of
 * - the offset at which the loss reaches `permittedLossDb`, on the detector's main lobe (`loss`), or for the detectors without a
 *   curve a limit (`stated`): `stated` the modem's data sheet, `chirp` a quarter of its bandwidth;
 * - the loop's capture range (`captureRange`);
 * - what the receiver's filter leaves beside the signal: occupied bandwidth / 2 + Δf ≤ B/2 (`filter`).
 *
 * A filter narrower than the signal leaves nothing: the allowance is 0, limited by `filter`, and every table on the link breaks.
 * `epsilon` is allowance·T. Throws RangeError when a figure it needs is missing or out of range.
 *
 * @card Allowance: the largest residual that a link bears.
 * @formula least of Δf at the permitted loss, capture range, (B − occupied)/2, or the stated limit, BW/4 of a chirp
 * @source loss inverted on the main lobe; filter: common practice
 * @units dB, Hz, symbols/s → Hz
 * @frame none
 * @range figures above 0; 0 ≤ α ≤ 1
 * @tolerance 1e-6 symbol rates of tables (link/allowance.test.ts)
 */
export function allowanceOf(link: LinkModel): Allowance {
  let allowance = allowances.get(link)
  if (!allowance) allowances.set(link, allowance = calculated(link))
  return allowance
}

/** One for all tables of a link. */
const allowances = new WeakMap<LinkModel, Allowance>()

function calculated(link: LinkModel): Allowance {
  positive('symbolRateHz', link.symbolRateHz)
  if (link.rolloff !== null && !(link.rolloff >= 0 && link.rolloff <= 1)) {
    throw new RangeError(`rolloff must lie between 0 and 1, it is ${link.rolloff}`)
  }
  const limits: [LimitedBy, number][] = [detectorLimit(link)]
  if (link.captureRangeHz !== null) limits.push(['captureRange', positive('captureRangeHz', link.captureRangeHz)])
  if (link.filterBandwidthHz !== null) {
    const room = (positive('filterBandwidthHz', link.filterBandwidthHz) - occupiedBandwidthHz(link)) / 2
    limits.push(['filter', Math.max(0, room)])
  }
  const [limitedBy, allowanceHz] = limits.reduce((least, next) => next[1] < least[1] ? next : least)
  const symbolTimeS = 1 / link.symbolRateHz
  return { symbolTimeS, epsilon: allowanceHz * symbolTimeS, allowanceHz, limitedBy }
}

function detectorLimit(link: LinkModel): [LimitedBy, number] {
  if (link.detector === 'stated') return ['stated', statedLimitHz(link)]
  if (link.detector === 'chirp') return ['stated', chirpLimitHz(link)]
  return ['loss', lossLimitHz(link)]
}

function statedLimitHz(link: LinkModel): number {
  if (link.limitHz === null) throw new RangeError('detector "stated" needs limitHz: the largest offset on the modem\'s data sheet, Hz')
  return positive('limitHz', link.limitHz)
}

/** Inverts the loss by bisection; it grows all along the main lobe. Good to 1e-14 in ε for closed forms, 1e-11 for error rates. */
function lossLimitHz(link: LinkModel): number {
  const permittedDb = positive('permittedLossDb', link.permittedLossDb)
  const curve = lossCurveOf(link)
  let inside = 0
  let outside = curve?.endEpsilon ?? 0
  for (let i = 0; curve && i < 52; i++) {
    const middle = (inside + outside) / 2
    if (curve.isWithin(middle, permittedDb)) inside = middle
    else outside = middle
  }
  return inside * link.symbolRateHz
}
