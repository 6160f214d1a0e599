import type { Direction, Site, StateTeme, UtcMs } from '../types'
import { siteStateTeme } from '../orbit/frames'
import { dot, minus, norm, plusScaled, type Triple } from '../orbit/vector'

/** Exact by definition of the metre. */
export const SPEED_OF_LIGHT_MPS = 299_792_458

export const EARTH_GM_M3PS2 = 398_600.8e9
const LIGHT_TIME_TOLERANCE_S = 1e-12
const MOST_ROUNDS = 8

/** States of a spacecraft by instant: an ephemeris's `stateAt`, or a propagator through `statesOf`. */
export type StateAt = (utcMs: UtcMs) => StateTeme | null

/** One spacecraft and one station, the two ends of a link. */
export interface Path {
  readonly stateAt: StateAt
  readonly site: Site
  readonly ut1MinusUtcS: number
}

/** `ratioMinusOne` keeps the digits that a ratio of nearly 1 would lose. */
export interface FrequencyRatio { readonly ratio: number, readonly ratioMinusOne: number, readonly lightTimeS: number }

/**
 * State a small time after another's instant, by the central attraction alone. For steps of light time at most: over
 * 0.3 s what it leaves out (oblateness) is below 1 mm and 3 mm/s.
 */
function shifted(state: StateTeme, bySeconds: number): { position: Triple, velocity: Triple } {
  const position = state.positionM as Triple
  const velocity = state.velocityMps as Triple
  const pull = -EARTH_GM_M3PS2 / norm(position) ** 3
  const acceleration: Triple = [pull * position[0], pull * position[1], pull * position[2]]
  return {
    position: plusScaled(plusScaled(position, bySeconds, velocity), bySeconds * bySeconds / 2, acceleration),
    velocity: plusScaled(velocity, bySeconds, acceleration),
  }
}

/** sqrt((1−βt²)/(1−βr²)) − 1 and (1−n·βr)/(1−n·βt) − 1, joined without cancellation. */
function ratioMinusOne(transmitter: Triple, receiver: Triple, direction: Triple): number {
  const c = SPEED_OF_LIGHT_MPS
  const motion = dot(direction, minus(transmitter, receiver)) / c / (1 - dot(direction, transmitter) / c)
  const [bt2, br2] = [dot(transmitter, transmitter) / c / c, dot(receiver, receiver) / c / c]
  const x = (br2 - bt2) / (1 - br2)
  const dilation = x / (1 + Math.sqrt(1 + x))
  return motion + dilation + motion * dilation
}

/**
 * Frequency received over frequency transmitted, one way, special relativity, in axes that do not rotate (TEME), the
 * station moving with ω×r:
 *
 *     f_r/f_t = (1 − n·v_r/c)/(1 − n·v_t/c) · sqrt((1 − v_t²/c²)/(1 − v_r²/c²)),  n from transmitter to receiver
 *
 * (relativistic Doppler between two moving ends, e.g. Misra and Enge, or any text on special relativity). `utcMs` is the
 * station's instant: of reception for a downlink, of transmission for an uplink. The light time is iterated below 1 ns.
 * Gravity, ionosphere and troposphere are left out.
 *
 * Throws a RangeError where the spacecraft's state is not known. A light time beyond the ephemeris's edge is bridged
 * from the state at the station's instant.
 *
 * @card Frequency ratio: what arrives over what was sent, with light time and time dilation.
 * @formula f_r/f_t = (1 − n·v_r/c)/(1 − n·v_t/c) · √((1 − v_t²/c²)/(1 − v_r²/c²)), n from transmitter to receiver, τ = |r|/c iterated
 * @source special relativity; e.g. Misra, Enge, Global Positioning System
 * @units UTC ms of the station → dimensionless, s
 * @frame TEME axes, taken as not turning
 * @range within the ephemeris; gravity, ionosphere, troposphere left out
 * @tolerance 0.05, 0.2, 0.5 Hz at 437.5, 2245, 8200 MHz of an independent program (doppler/reference-doppler.test.ts)
 */
export function receivedOverTransmitted(path: Path, direction: Direction, utcMs: UtcMs): FrequencyRatio {
  const station = siteStateTeme(path.site, utcMs, path.ut1MinusUtcS)
  const now = path.stateAt(utcMs)
  if (!now) throw new RangeError(`The spacecraft's state at ${utcMs} is not known: ask within the ephemeris`)
  const place = station.positionM as Triple
  const sign = direction === 'downlink' ? -1 : 1

  // An instant in ms resolves 0.24 µs, a spacecraft moves 2 mm in that: the rest is bridged by `shifted`.
  let lightTimeS = norm(minus(now.positionM as Triple, place)) / SPEED_OF_LIGHT_MPS
  const baseMs = utcMs + sign * lightTimeS * 1000
  const base = path.stateAt(baseMs)
  const fromBase = (tau: number) => base
    ? shifted(base, sign * tau - (baseMs - utcMs) / 1000)
    : shifted(now, sign * tau)

  let spacecraft = fromBase(lightTimeS)
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const next = norm(minus(spacecraft.position, place)) / SPEED_OF_LIGHT_MPS
    const change = Math.abs(next - lightTimeS)
    lightTimeS = next
    spacecraft = fromBase(lightTimeS)
    if (change < LIGHT_TIME_TOLERANCE_S) break
  }

  const up = minus(spacecraft.position, place)
  const length = norm(up)
  const alongRay: Triple = [sign * up[0] / length, sign * up[1] / length, sign * up[2] / length]
  const velocity = station.velocityMps as Triple
  const offset = direction === 'downlink'
    ? ratioMinusOne(spacecraft.velocity, velocity, alongRay)
    : ratioMinusOne(velocity, spacecraft.velocity, alongRay)
  return { ratio: 1 + offset, ratioMinusOne: offset, lightTimeS }
}

/**
 * Sky frequency to set at the station, over the carrier, minus one. Downlink: ratio − 1, the receiver at what arrives.
 * Uplink: 1/ratio − 1, transmitted so that the spacecraft hears the carrier. `utcMs` as above.
 *
 * @card Fraction to tune by: how far off its carrier a station has to be set.
 * @formula downlink: ratio − 1; uplink: 1/ratio − 1
 * @source special relativity
 * @units UTC ms of the station → dimensionless
 * @frame TEME axes
 * @range as the ratio
 * @tolerance 0.01 Hz at 437 MHz and 7 km/s, both signs (doppler/closed-forms.test.ts)
 */
export function neededOverCarrierMinusOne(path: Path, direction: Direction, utcMs: UtcMs): number {
  const { ratioMinusOne: offset } = receivedOverTransmitted(path, direction, utcMs)
  return direction === 'downlink' ? offset : -offset / (1 + offset)
}
