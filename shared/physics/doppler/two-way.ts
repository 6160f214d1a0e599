import { siteStateTeme } from '../orbit/frames'
import { dot, minus, norm, type Triple } from '../orbit/vector'
import type { Hz, Turnaround, UtcMs } from '../types'
import { ratioMinusOne, receivedOverTransmitted, SPEED_OF_LIGHT_MPS, type Path } from './ratio'

const C = SPEED_OF_LIGHT_MPS

/** Ratios in common use, downlink over uplink: S/S, X/S, X/X and S/X bands (CCSDS 401.0-B). */
export const COMMON_TURNAROUNDS: readonly (readonly [numerator: number, denominator: number])[] = [[240, 221], [880, 221], [880, 749], [240, 749]]

/** Each round divides the error by 40,000 in low orbit; two leave below 1e-12 s. */
const LIGHT_TIME_ROUNDS = 3

export interface TwoWay {
  /** What the spacecraft hears over what the station sent, minus one. */
  readonly upMinusOne: number
  /** What the station hears over what the spacecraft sent, minus one. */
  readonly downMinusOne: number
  /** From transmission to reception at the station, s. */
  readonly roundTripS: number
}

/**
 * Both legs of a round trip that ends at the station at `utcMs`. The spacecraft turns the light around where the downlink
 * leaves it; the station sent it `roundTripS` before, from where it then was.
 *
 * @card Two-way ratios: up and down through a transponder, with light times both ways.
 * @formula ratio_up at t − τ_d − τ_u, ratio_down at t, each by the frequency ratio; τ = |r|/c iterated
 * @source special relativity
 * @units UTC ms of reception → dimensionless, s
 * @frame TEME axes, taken as not turning
 * @range within the ephemeris; one station both ways; gravity cancels, ionosphere and troposphere left out
 * @tolerance 0.1 Hz at 437.5 MHz and 0.4 Hz at 2245 MHz of an independent program’s two legs (doppler/two-way.test.ts)
 */
export function twoWayOf(path: Path, utcMs: UtcMs): TwoWay {
  const craft = new Float64Array(6)
  const down = receivedOverTransmitted(path, 'downlink', utcMs, craft)
  const place: Triple = [craft[0]!, craft[1]!, craft[2]!]
  const velocity: Triple = [craft[3]!, craft[4]!, craft[5]!]
  const stationAt = (tau: number) => siteStateTeme(path.site, utcMs - (down.lightTimeS + tau) * 1000, path.ut1MinusUtcS)
  let upS = down.lightTimeS
  for (let round = 0; round < LIGHT_TIME_ROUNDS; round++) upS = norm(minus(place, stationAt(upS).positionM as Triple)) / C
  const station = stationAt(upS)
  const siteVelocity = station.velocityMps as Triple
  const ray = minus(place, station.positionM as Triple)
  const alongRay = (v: Triple): number => dot(v, ray) / (norm(ray) * C)
  return {
    upMinusOne: ratioMinusOne(alongRay(siteVelocity), alongRay(velocity), dot(siteVelocity, siteVelocity) / C ** 2, dot(velocity, velocity) / C ** 2),
    downMinusOne: down.ratioMinusOne,
    roundTripS: down.lightTimeS + upS,
  }
}

/**
 * What the spacecraft sends where nothing shifts its uplink: uplink · N/D.
 *
 * @card Turned-around carrier: the downlink that a coherent transponder makes.
 * @formula f_up · N/D
 * @source CCSDS 401.0-B
 * @units Hz → Hz
 * @frame at the spacecraft
 * @range integers N, D above 0
 * @tolerance exact: 2106.40625 MHz · 240/221 = 2287.5 MHz (doppler/two-way.test.ts)
 */
export const turnedAroundHz = (uplinkHz: Hz, { numerator, denominator }: Pick<Turnaround, 'numerator' | 'denominator'>): Hz => uplinkHz * numerator / denominator

export interface CoherentCarrier { readonly carrierHz: Hz, readonly turnaround: Turnaround }

/**
 * Where a coherent downlink is received, minus its carrier, Hz: f_ground·ratio_up·(N/D)·ratio_down − f0. Where the
 * uplink is pre-compensated the spacecraft hears it unshifted, and the downlink shows the one-way shift only. The steps
 * that a stepped uplink leaves at the spacecraft come back times N/D a round trip later; `returnedStepsHz` has those.
 *
 * @card Coherent offset: what to tune beside the carrier on a two-way link.
 * @formula f_ground·ratio_up·(N/D)·ratio_down − f0; pre-compensated: f_up·(N/D)·ratio_down − f0
 * @source special relativity; CCSDS 401.0-B
 * @units Hz, UTC ms of reception → Hz
 * @frame TEME axes
 * @range downlinks; one station both ways
 * @tolerance 1 Hz of f·2β/(1 − β) = +106 826 Hz at 2287.5 MHz and −7 km/s (doppler/two-way.test.ts)
 */
export function coherentOffsetHz(path: Path, { carrierHz, turnaround }: CoherentCarrier, utcMs: UtcMs): Hz {
  const sentHz = turnaround.uplinkHz === null ? carrierHz : turnedAroundHz(turnaround.uplinkHz, turnaround)
  if (turnaround.uplinkPrecompensated) return sentHz - carrierHz + sentHz * receivedOverTransmitted(path, 'downlink', utcMs).ratioMinusOne
  const { upMinusOne, downMinusOne } = twoWayOf(path, utcMs)
  return sentHz - carrierHz + sentHz * (upMinusOne + downMinusOne + upMinusOne * downMinusOne)
}

/**
 * Whether an uplink is the one that a coherent downlink's carrier is made of.
 *
 * @card Uplink of a coherent downlink: whether a carrier is turned around to another.
 * @formula |f_up·N/D − f_down| < 1 Hz
 * @source CCSDS 401.0-B
 * @units Hz → true or false
 * @frame at the spacecraft
 * @range links with a turnaround
 * @tolerance 2106.40625 MHz and 2287.5 MHz by 240/221 (doppler/two-way.test.ts)
 */
export const isTurnedAroundTo = (uplinkHz: Hz, { carrierHz, turnaround }: { readonly carrierHz: Hz, readonly turnaround?: Turnaround | null }): boolean =>
  Boolean(turnaround) && Math.abs(turnedAroundHz(uplinkHz, turnaround!) - carrierHz) < 1

/**
 * What a pre-compensated uplink's residual (needed minus set) does to the downlink that is needed a round trip later, Hz: set too high
 * by r, the spacecraft hears and turns around r more. Both legs' own shifts of r are left out, 5e-5 of it in low orbit.
 *
 * @card Returned steps: what an uplink’s steps do to its coherent downlink.
 * @formula Δf_down(t) = −r(t − round trip)·N/D, r the uplink’s needed minus set
 * @source mechanics; CCSDS 401.0-B
 * @units Hz → Hz
 * @frame none
 * @range pre-compensated uplinks
 * @tolerance exact: 100 Hz by 240/221 come back as 108.597 Hz (doppler/two-way.test.ts)
 */
export const returnedStepsHz = (uplinkResidualHz: Hz, { numerator, denominator }: Pick<Turnaround, 'numerator' | 'denominator'>): Hz => -uplinkResidualHz * numerator / denominator

/**
 * The link whose partial derivatives an error budget takes. A spacecraft that is not where it is thought to be, a late
 * clock or a wrong UT1 mis-compensates the uplink as well, and that comes back: a pre-compensated link answers to errors
 * by both legs, as one does that is not compensated (to 3e-5 of it), though its nominal shift is of one.
 *
 * @card Answering link: what a coherent link’s partials are taken of.
 * @formula δf = f0·δ(ratio_up·ratio_down), also where the uplink is pre-compensated
 * @source mechanics
 * @units none
 * @frame none
 * @range any link; without a turnaround the link itself
 * @tolerance 0.1 % of the uplink mis-compensated by a moved spacecraft (doppler/two-way.test.ts)
 */
export const answeringLink = <L extends { readonly turnaround?: Turnaround | null }>(link: L): L =>
  link.turnaround?.uplinkPrecompensated ? { ...link, turnaround: { ...link.turnaround, uplinkPrecompensated: false } } : link

/**
 * A budget's oscillator limits as they count on a link, ppm. Coherent: the spacecraft's drops out, since it sends what it
 * hears; the station's moves its uplink and its receiver alike and cancels. That takes one station, one reference for
 * both, and an error that stands over a round trip.
 *
 * @card Oscillators of a coherent link: what of them is left.
 * @formula spacecraft 0; station b·f·ratio − b·f = 0 to first order
 * @source mechanics
 * @units ppm → ppm
 * @frame none
 * @range one station reference for uplink and receiver
 * @tolerance exact (predict/build-table.test.ts)
 */
export function withOscillatorsOf<B extends { readonly spacecraftPpm: number, readonly stationPpm: number }>(budget: B, link: { readonly turnaround?: Turnaround | null }): B {
  return link.turnaround ? { ...budget, spacecraftPpm: 0, stationPpm: 0 } : budget
}
