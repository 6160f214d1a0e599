import type { Direction, Ephemeris, Hz, Look, PredictedPass, Site, UtcMs } from '../types'
import { createSeenFrequency, seenOverCarrierMinusOne } from '../doppler/seen-ratio'
import type { SiteTrack } from '../orbit/site-track'
import { createSiteTrack, EAST, EAST_RATE, NORTH, NORTH_RATE, UP, UP_RATE, VIEW_LENGTH } from '../orbit/site-track'

/** Two samples closer than this would bear the same millisecond. */
const SAME_INSTANT_MS = 0.5

export interface SampleOptions {
  readonly ephemeris: Ephemeris
  readonly site: Site
  readonly direction: Direction
  readonly carrierHz: Hz
  readonly ut1MinusUtcS: number
  readonly stepS: number
}

export interface PassSample extends Look {
  readonly atMs: UtcMs
  /** Frequency to set at the station minus carrier. */
  readonly dopplerHz: Hz
  readonly dopplerRateHzPerS: number
}

/** AOS, AOS + stepS, …, with culmination and LOS in their places; rising, no instant twice. */
function forEachSampleTime(pass: PredictedPass, stepMs: number, visit: (utcMs: UtcMs) => void): void {
  const { aosMs, culminationMs, losMs } = pass
  const isApart = (a: UtcMs, b: UtcMs): boolean => Math.abs(a - b) >= SAME_INSTANT_MS
  const hasCulmination = isApart(culminationMs, aosMs)
  const hasLos = isApart(losMs, aosMs) && (!hasCulmination || isApart(losMs, culminationMs))
  visit(aosMs)
  let isPast = !hasCulmination
  for (let k = 1, at = aosMs + stepMs; at < losMs; k++, at = aosMs + k * stepMs) {
    if (!isPast && at >= culminationMs - SAME_INSTANT_MS) {
      isPast = true
      visit(culminationMs)
    }
    if (isApart(at, culminationMs) && isApart(at, losMs) && isApart(at, aosMs)) visit(at)
  }
  if (!isPast) visit(culminationMs)
  if (hasLos) visit(losMs)
}

/** Where each number of a streamed row stands. */
export const ROW = { atMs: 0, azimuthRad: 1, elevationRad: 2, rangeM: 3, rangeRateMps: 4, dopplerHz: 5 } as const

export interface RowOptions {
  readonly direction: Direction
  readonly carrierHz: Hz
  readonly stepS: number
}

/**
 * Look angles and Doppler through a pass at each sample, one row after the other in the same array: copy what is to stay.
 * Nothing is allocated a row, so that a day of a fleet fits in little memory. Within 1e-12 of the carrier, 0.0005°, 1 m and
 * 0.01 m/s, as the parts it is made of. Throws a RangeError where the track does not cover the pass.
 *
 * @card Samples of a pass, streamed: angles and Doppler row by row, nothing kept.
 * @formula look angles and needed frequency at AOS + k·step
 * @source the cards of each
 * @units UTC ms, s → rad, m, m/s, Hz
 * @frame east, north, up of the station
 * @range steps above 0
 * @tolerance 0.05 Hz and 0.01 m/s at 437.5 MHz (predict/sample-pass.test.ts)
 */
export function streamPass(pass: PredictedPass, track: SiteTrack, { direction, carrierHz, stepS }: RowOptions, visit: (row: Float64Array) => void): void {
  const row = new Float64Array(6)
  const view = new Float64Array(VIEW_LENGTH)
  forEachSampleTime(pass, stepS * 1000, (atMs) => {
    if (!track.viewAt(atMs, view)) throw new RangeError(`No state at ${atMs}: make the ephemeris cover the pass`)
    const east = view[EAST]!
    const north = view[NORTH]!
    const up = view[UP]!
    const level2 = east * east + north * north
    const rangeM = Math.sqrt(level2 + up * up)
    const azimuth = Math.atan2(east, north)
    row[ROW.atMs] = atMs
    row[ROW.azimuthRad] = azimuth < 0 ? azimuth + 2 * Math.PI : azimuth
    row[ROW.elevationRad] = Math.atan2(up, Math.sqrt(level2))
    row[ROW.rangeM] = rangeM
    row[ROW.rangeRateMps] = (east * (view[EAST_RATE]! - track.siteSpeedMps) + north * view[NORTH_RATE]! + up * view[UP_RATE]!) / rangeM
    row[ROW.dopplerHz] = carrierHz * seenOverCarrierMinusOne(track, view, direction)
    visit(row)
  })
}

/**
 * What an antenna and a radio see through a pass: look angles, Doppler and its rate at each sample.
 *
 * @card Samples of a pass: angles, Doppler and its rate at even steps, at culmination and at both ends.
 * @formula look angles and needed frequency at AOS + k·step
 * @source the cards of each
 * @units UTC ms, s → rad, m, m/s, Hz, Hz/s
 * @frame east, north, up of the station
 * @range steps above 0
 * @tolerance 0.05 Hz and 0.01 m/s at 437.5 MHz (predict/sample-pass.test.ts)
 */
export function samplePass(pass: PredictedPass, options: SampleOptions): PassSample[] {
  const { ephemeris, site, ut1MinusUtcS, stepS, direction, carrierHz } = options
  if (!(stepS > 0)) throw new RangeError(`stepS is ${stepS}: give a positive number of seconds`)
  const track = createSiteTrack(ephemeris, site, ut1MinusUtcS)
  const { rateHzPerS } = createSeenFrequency(track, direction, carrierHz)
  const samples: PassSample[] = []
  streamPass(pass, track, options, ([atMs, azimuthRad, elevationRad, rangeM, rangeRateMps, dopplerHz]) => samples.push({
    atMs: atMs!, azimuthRad: azimuthRad!, elevationRad: elevationRad!, rangeM: rangeM!, rangeRateMps: rangeRateMps!, dopplerHz: dopplerHz!,
    dopplerRateHzPerS: rateHzPerS(atMs!),
  }))
  return samples
}
