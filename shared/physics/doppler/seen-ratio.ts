import type { Direction, Hz, UtcMs } from '../types'
import { EARTH_ROTATION_RAD_PER_S } from '../orbit/frames'
import type { SiteTrack } from '../orbit/site-track'
import { EAST, EAST_RATE, NORTH, NORTH_RATE, UP, UP_RATE, VIEW_LENGTH } from '../orbit/site-track'
import { derivativePerS } from './derivative'
import type { NeededFrequency } from './needed'
import { EARTH_GM_M3PS2, SPEED_OF_LIGHT_MPS } from './ratio'

const C = SPEED_OF_LIGHT_MPS

/**
 * Sky frequency to set at the station over the carrier, minus one, from one view of the spacecraft: the same relation as
 * `neededOverCarrierMinusOne`, worked in the site's own axes as they stand at that instant, where dot products are what they
 * are in TEME. The light time is bridged by the central attraction from the view itself: what that leaves out (oblateness,
 * 0.01 m/s² in low orbit, over 10 ms of light) is below 1e-12 of the carrier. Nothing is allocated.
 *
 * @card Fraction to tune by, from a view: the same relation in the station’s own axes.
 * @formula downlink: ratio − 1; uplink: 1/ratio − 1; light time bridged by the central attraction
 * @source special relativity; mechanics
 * @units m, m/s → dimensionless
 * @frame east, north, up of the station, at that instant not turning
 * @range within the ephemeris; oblateness over the light time left out, 1e-12
 * @tolerance 0.05 Hz at 437.5 MHz of an independent program (predict/sample-pass.test.ts)
 */
export function seenOverCarrierMinusOne(track: SiteTrack, view: Float64Array, direction: Direction): number {
  const { siteEastM, siteNorthM, siteUpM, siteSpeedMps } = track
  const e = view[EAST]!
  const n = view[NORTH]!
  const u = view[UP]!
  let ve = view[EAST_RATE]!
  let vn = view[NORTH_RATE]!
  let vu = view[UP_RATE]!
  const re = e + siteEastM
  const rn = n + siteNorthM
  const ru = u + siteUpM
  const r2 = re * re + rn * rn + ru * ru
  const pull = -EARTH_GM_M3PS2 / (r2 * Math.sqrt(r2))
  const ae = pull * re
  const an = pull * rn
  const au = pull * ru

  const sign = direction === 'downlink' ? -1 : 1
  // |p + τv| to the first order in v/c: what is left of the light time is below 0.1 ns.
  const near = Math.sqrt(e * e + n * n + u * u)
  const tau = sign * (near + sign * (e * ve + n * vn + u * vu) / C) / C
  const x = e + tau * (ve + tau / 2 * ae)
  const y = n + tau * (vn + tau / 2 * an)
  const z = u + tau * (vu + tau / 2 * au)
  const range = Math.sqrt(x * x + y * y + z * z)
  ve += tau * ae
  vn += tau * an
  vu += tau * au

  // Along the ray from transmitter to receiver, over c.
  const toRay = sign / (range * C)
  const craft = (x * ve + y * vn + z * vu) * toRay
  const site = x * siteSpeedMps * toRay
  const craft2 = (ve * ve + vn * vn + vu * vu) / (C * C)
  const site2 = siteSpeedMps * siteSpeedMps / (C * C)
  if (direction === 'downlink') return shift(craft, site, craft2, site2)
  const offset = shift(site, craft, site2, craft2)
  return -offset / (1 + offset)
}

/** (1 − r)/(1 − t)·sqrt((1 − t²)/(1 − r²)) − 1 without cancellation; speeds over c along the ray, and squared in all. */
function shift(transmitter: number, receiver: number, transmitter2: number, receiver2: number): number {
  const motion = (transmitter - receiver) / (1 - transmitter)
  // sqrt(1 + x) − 1 with x below 1e-9.
  const dilation = (receiver2 - transmitter2) / 2
  return motion + dilation + motion * dilation
}

/** What the needed frequency answers to at one instant, Hz per second of time, signed. */
export interface SeenPartials {
  /** ∂f/∂t_along: the spacecraft moved along its orbit, the station staying. */
  readonly alongTrackHzPerS: number
  /** ∂f/∂UT1: the station turned with the Earth, the spacecraft staying. */
  readonly ut1HzPerS: number
  /** ḟ, both moving: their sum. */
  readonly rateHzPerS: number
}

/**
 * Partials for the error budget, of first order in v/c: f = ∓f0·ρ̇/c with ρ̇ = p·w/ρ, p the place seen and w the velocity against the
 * site's. Moved along its orbit the spacecraft has ∂p = v and ∂w = the central attraction; the site turned on with the Earth has
 * ∂p = −u and ∂w = −ω×u. Within 0.2 % (oblateness and light time are left out). RangeError outside the track.
 *
 * @card Answers to timing and UT1, from a view: for the budget, quickly.
 * @formula ∂f = ∓f0/c·∂ρ̇, ∂ρ̇ = (∂p·w + p·∂w)/ρ − ρ̇·(p·∂p)/ρ²
 * @source mechanics
 * @units Hz, UTC ms → Hz/s
 * @frame east, north, up of the station
 * @range within the ephemeris; first order, oblateness left out, 0.2 %
 * @tolerance 0.2 % of differences by true propagation (doppler/seen-ratio.test.ts)
 */
export function seenPartials(track: SiteTrack, direction: Direction, carrierHz: Hz, utcMs: UtcMs): SeenPartials {
  const two = new Float64Array(2)
  seenPartialsInto(track, direction, carrierHz, utcMs, two)
  const alongTrackHzPerS = two[0]!
  const ut1HzPerS = two[1]!
  return { alongTrackHzPerS, ut1HzPerS, rateHzPerS: alongTrackHzPerS + ut1HzPerS }
}

/**
 * The same, written as two numbers: ∂f/∂t_along, ∂f/∂UT1.
 *
 * @card Answers to timing and UT1, from a view, written: the same without an object an instant.
 * @formula ∂f = ∓f0/c·∂ρ̇, ∂ρ̇ = (∂p·w + p·∂w)/ρ − ρ̇·(p·∂p)/ρ²
 * @source mechanics
 * @units Hz, UTC ms → Hz/s
 * @frame east, north, up of the station
 * @range within the ephemeris; first order, oblateness left out, 0.2 %
 * @tolerance 0.2 % of differences by true propagation (doppler/seen-ratio.test.ts)
 */
export function seenPartialsInto(track: SiteTrack, direction: Direction, carrierHz: Hz, utcMs: UtcMs, into: Float64Array): void {
  const view = viewOf(track, utcMs)
  const { siteEastM, siteNorthM, siteUpM, siteSpeedMps } = track
  const e = view[EAST]!
  const n = view[NORTH]!
  const u = view[UP]!
  const ve = view[EAST_RATE]!
  const vn = view[NORTH_RATE]!
  const vu = view[UP_RATE]!
  const re = e + siteEastM
  const rn = n + siteNorthM
  const ru = u + siteUpM
  const r2 = re * re + rn * rn + ru * ru
  const pull = -EARTH_GM_M3PS2 / (r2 * Math.sqrt(r2))
  const range2 = e * e + n * n + u * u
  const we = ve - siteSpeedMps
  const closing = (e * we + n * vn + u * vu) / range2
  // Per range, in time of the spacecraft and of the Earth.
  const along = ve * we + vn * vn + vu * vu + pull * (e * re + n * rn + u * ru) - closing * (e * ve + n * vn + u * vu)
  // The site's velocity is to the east and bends towards the axis, which is up by the cosine and south by the sine of the latitude.
  const inward = EARTH_ROTATION_RAD_PER_S * siteSpeedMps
  const turn = siteSpeedMps * (closing * e - we) + inward * (u * track.axisNorth - n * track.axisUp)
  const perMps = (direction === 'downlink' ? -1 : 1) * carrierHz / (C * Math.sqrt(range2))
  into[0] = perMps * along
  into[1] = perMps * turn
}

/** The view asked last, since a planner asks several things of one instant. */
const lastView = { track: null as SiteTrack | null, atMs: new Float64Array(1), view: new Float64Array(VIEW_LENGTH) }

function viewOf(track: SiteTrack, utcMs: UtcMs): Float64Array {
  const { atMs, view } = lastView
  if (lastView.track === track && atMs[0] === utcMs) return view
  lastView.track = null
  if (!track.viewAt(utcMs, view)) throw new RangeError(`The spacecraft's state at ${utcMs} is not known: ask within the ephemeris`)
  lastView.track = track
  atMs[0] = utcMs
  return view
}

/**
 * What to set at the station over time, as `createNeededFrequency`, from a track: quicker by an order, within 1e-12 of the
 * carrier. The rate is the same fourth-order difference. Throws a RangeError outside the track.
 *
 * @card Needed frequency and its rate, from a view: as above, quicker.
 * @formula f0 + Δf; rate by five-point difference, h = 0.25 s
 * @source special relativity; Abramowitz, Stegun, table 25.2
 * @units Hz, UTC ms → Hz, Hz/s
 * @frame east, north, up of the station
 * @range within the ephemeris; before any converter
 * @tolerance 0.05 Hz at 437.5 MHz of an independent program (predict/sample-pass.test.ts)
 */
export function createSeenFrequency(track: SiteTrack, direction: Direction, carrierHz: Hz): NeededFrequency {
  const dopplerHz = (utcMs: UtcMs): Hz => carrierHz * seenOverCarrierMinusOne(track, viewOf(track, utcMs), direction)
  return {
    frequencyHz: utcMs => carrierHz + dopplerHz(utcMs),
    dopplerHz,
    rateHzPerS: utcMs => derivativePerS(seconds => dopplerHz(utcMs + seconds * 1000)),
  }
}
