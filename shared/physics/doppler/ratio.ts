import type { Direction, Site, StateTeme, UtcMs } from '../types'
import { siteStateTeme } from '../orbit/frames'

/** Exact by definition of the metre. */
export const SPEED_OF_LIGHT_MPS = 299_792_458

export const EARTH_GM_M3PS2 = 398_600.8e9
const C = SPEED_OF_LIGHT_MPS
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
 * Frequency received over frequency transmitted, one way, special relativity, in axes that do not rotate (TEME), the
 * station moving with ω×r:
 *
 *     f_r/f_t = (1 − n·v_r/c)/(1 − n·v_t/c) · sqrt((1 − v_t²/c²)/(1 − v_r²/c²)),  n from transmitter to receiver
 *
 * (relativistic Doppler between two moving ends, e.g. Misra and Enge, or any text on special relativity). `utcMs` is the
 * station's instant: of reception for a downlink, of transmission for an uplink. The light time is iterated below 1 ns.
 * Gravity, ionosphere and troposphere are left out.
 *
 * Into `craft`, where given, go the spacecraft's place and velocity where the light meets it, TEME, m and m/s.
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
export function receivedOverTransmitted(path: Path, direction: Direction, utcMs: UtcMs, craft?: Float64Array): FrequencyRatio {
  const station = siteStateTeme(path.site, utcMs, path.ut1MinusUtcS)
  const now = path.stateAt(utcMs)
  if (!now) throw new RangeError(`The spacecraft's state at ${utcMs} is not known: ask within the ephemeris`)
  const sx = station.positionM[0]
  const sy = station.positionM[1]
  const sz = station.positionM[2]
  const sign = direction === 'downlink' ? -1 : 1

  // An instant in ms resolves 0.24 µs, a spacecraft moves 2 mm in that: the rest is bridged from the nearest state.
  let lightTimeS = Math.sqrt((now.positionM[0] - sx) ** 2 + (now.positionM[1] - sy) ** 2 + (now.positionM[2] - sz) ** 2) / C
  const baseMs = utcMs + sign * lightTimeS * 1000
  const base = path.stateAt(baseMs)
  const { positionM, velocityMps } = base ?? now
  const px = positionM[0]
  const py = positionM[1]
  const pz = positionM[2]
  const vx = velocityMps[0]
  const vy = velocityMps[1]
  const vz = velocityMps[2]
  const baseAfterS = base ? (baseMs - utcMs) / 1000 : 0

  // By the central attraction alone. For light time at most: over 0.3 s what it leaves out (oblateness) is below 1 mm and 3 mm/s.
  const r2 = px * px + py * py + pz * pz
  const pull = -EARTH_GM_M3PS2 / (r2 * Math.sqrt(r2))
  let by = 0
  let x = 0
  let y = 0
  let z = 0
  let rangeM = 0
  let change = Infinity
  // The last round is made with the light time that is given back.
  for (let round = 0; round < MOST_ROUNDS; round++) {
    by = sign * lightTimeS - baseAfterS
    const fall = 1 + by * by / 2 * pull
    x = px * fall + by * vx - sx
    y = py * fall + by * vy - sy
    z = pz * fall + by * vz - sz
    rangeM = Math.sqrt(x * x + y * y + z * z)
    if (change < LIGHT_TIME_TOLERANCE_S) break
    change = Math.abs(rangeM / C - lightTimeS)
    lightTimeS = rangeM / C
  }

  // Speeds over c along the ray from transmitter to receiver, and squared in all.
  const ux = vx + by * pull * px
  const uy = vy + by * pull * py
  const uz = vz + by * pull * pz
  const wx = station.velocityMps[0]
  const wy = station.velocityMps[1]
  const toRay = sign / (rangeM * C)
  const craftBeta = (x * ux + y * uy + z * uz) * toRay
  const siteBeta = (x * wx + y * wy) * toRay
  const craft2 = (ux * ux + uy * uy + uz * uz) / (C * C)
  const site2 = (wx * wx + wy * wy) / (C * C)
  const offset = direction === 'downlink' ? ratioMinusOne(craftBeta, siteBeta, craft2, site2) : ratioMinusOne(siteBeta, craftBeta, site2, craft2)
  if (craft) [craft[0], craft[1], craft[2], craft[3], craft[4], craft[5]] = [x + sx, y + sy, z + sz, ux, uy, uz]
  return { ratio: 1 + offset, ratioMinusOne: offset, lightTimeS }
}

/**
 * (1−n·βr)/(1−n·βt) − 1 and sqrt((1−βt²)/(1−βr²)) − 1, joined without cancellation. `transmitter` and `receiver` are speeds over c
 * along the ray, the others the squares of whole speeds over c.
 *
 * @card Ratio of two speeds: relativistic Doppler without loss of digits.
 * @formula (1 − n·β_r)/(1 − n·β_t) · √((1 − β_t²)/(1 − β_r²)) − 1
 * @source special relativity
 * @units speeds over c → dimensionless
 * @frame one inertial frame for both, along the ray from transmitter to receiver
 * @range speeds under that of light
 * @tolerance 0.01 Hz at 437 MHz and 7 km/s, both signs (doppler/closed-forms.test.ts)
 */
export function ratioMinusOne(transmitter: number, receiver: number, transmitter2: number, receiver2: number): number {
  const motion = (transmitter - receiver) / (1 - transmitter)
  const x = (receiver2 - transmitter2) / (1 - receiver2)
  const dilation = x / (1 + Math.sqrt(1 + x))
  return motion + dilation + motion * dilation
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
