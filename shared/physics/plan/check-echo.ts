import { returnedStepsHz, twoWayOf } from '../doppler/two-way'
import type { Hz, LinkModel, Propagator, RadioModel, Site, Span, UplinkInUse, UtcMs } from '../types'
import type { CheckCurve } from './check-curve'
import { checkCurveOf } from './check-curve'
import type { AppliedRow } from './check-rows'
import { applyRows, skyAt } from './check-rows'
import { seriesOf } from './check-series'

/** What one row of an uplink adds to the needed downlink while it comes back; none where nothing was sent. */
export interface Echo extends Span {
  readonly steps: { readonly hz: (utcMs: UtcMs) => Hz, readonly hzPerS: (utcMs: UtcMs) => number } | null
}

export interface EchoQuery {
  readonly propagator: Propagator
  readonly site: Site
  readonly link: LinkModel
  readonly radio: RadioModel
  readonly ut1MinusUtcS: number
  /** Left out or null: not known, and nothing is added. */
  readonly uplink?: UplinkInUse | null
}

const ROUND_TRIP_TOLERANCE_S = 1e-8
const ROUNDS = 4

/**
 * The steps of a pre-compensated uplink as they come back over one workable part of its coherent downlink, signed and row by row,
 * in order, the part covered; null where the link is not coherent, its uplink not pre-compensated or not known.
 *
 * @card Steps that come back: an uplink’s residual on its downlink, as the checker adds it.
 * @formula N/D·(g_k + s_k·(t′ − e_k) − f_up(t′)), t′ = t − round trip, while row k was in effect and the uplink workable
 * @source mechanics; CCSDS 401.0-B
 * @units UTC ms of reception → Hz, Hz/s
 * @frame sky frequency
 * @range within the part; one station both ways
 * @tolerance 0.5 Hz at 2287.5 MHz of rows set off against direct propagation (predict/returned-steps.test.ts)
 */
export function echoesOf({ propagator, site, link, ut1MinusUtcS, uplink }: EchoQuery, { span, stateAt }: CheckCurve): Echo[] | null {
  const { turnaround } = link
  if (!uplink || !turnaround?.uplinkPrecompensated) return null
  const path = { stateAt, site, ut1MinusUtcS }
  const panelMs = 86_400_000 / propagator.elements.meanMotionRevPerDay / 24
  const roundTrip = seriesOf((utcMs, into) => {
    into[0] = twoWayOf(path, utcMs).roundTripS
  }, { ...span, panelMs, nodes: 14, tolerances: [ROUND_TRIP_TOLERANCE_S] })
  const sentMs = (utcMs: UtcMs): UtcMs => utcMs - 1000 * roundTrip.valueAt(Math.min(Math.max(utcMs, span.fromMs), span.toMs))
  const backMs = (utcMs: UtcMs): UtcMs => {
    let at = utcMs
    for (let round = 0; round < ROUNDS; round++) at += utcMs - sentMs(at)
    return at
  }
  const needed = checkCurveOf({ propagator, site, ut1MinusUtcS, link: { direction: 'uplink', carrierHz: uplink.carrierHz }, span: { fromMs: sentMs(span.fromMs), toMs: span.toMs } })
  const stepsOf = (row: AppliedRow): Echo['steps'] => ({
    hz: (utcMs) => {
      const at = sentMs(utcMs)
      return returnedStepsHz(uplink.carrierHz + needed.offsetHz(at) - skyAt(row, at), turnaround)
    },
    hzPerS: utcMs => returnedStepsHz(needed.rateHzPerS(sentMs(utcMs)) - row.skySlopeHzPerS, turnaround),
  })

  const applied = applyRows(uplink.retunes, uplink.radio)
  const echoes: Echo[] = []
  let doneMs = span.fromMs
  for (const part of uplink.parts) {
    for (const [k, row] of applied.entries()) {
      const fromMs = Math.max(span.fromMs, backMs(Math.max(part.fromMs, row.effectMs)))
      const toMs = Math.min(span.toMs, backMs(Math.min(part.toMs, applied[k + 1]?.effectMs ?? part.toMs)))
      if (fromMs > toMs) continue
      if (fromMs > doneMs) echoes.push({ fromMs: doneMs, toMs: fromMs, steps: null })
      echoes.push({ fromMs, toMs, steps: stepsOf(row) })
      doneMs = toMs
    }
  }
  if (echoes.length === 0 || doneMs < span.toMs) echoes.push({ fromMs: doneMs, toMs: span.toMs, steps: null })
  return echoes
}
