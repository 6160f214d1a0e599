import { ratioMinusOne, SPEED_OF_LIGHT_MPS } from '../doppler/ratio'
import { EARTH_ROTATION_RAD_PER_S, gmstRad, sitePosition, ut1Of } from '../orbit/frames'
import type { Direction, Site, UtcMs } from '../types'
import type { CheckStates } from './check-states'

const C = SPEED_OF_LIGHT_MPS

/** What a station sees of a spacecraft at an instant. */
export interface Sight {
  /** Frequency to set over the carrier, minus one. */
  readonly tunedMinusOne: (utcMs: UtcMs) => number
  /** ∂ρ̇/∂UT1 at the instant asked last, m/s per second: the station turned on with the Earth, the spacecraft staying. */
  readonly rangeRateByUt1: () => number
}

/**
 * One way between the checker's own states and a station, in axes that do not rotate: special relativity, the light time by two
 * rounds, the second on the state where the first has led (what is left is bridged at that state's speed, 1e-13 s).
 *
 * For UT1 with s the station, u = ω×s, d the line from station to spacecraft, w the spacecraft's velocity against the station's:
 * ρ̇ = d·w/ρ, ∂d = −u, ∂w = −ω×u. A part in 10⁴, as light time counts.
 *
 * @card Checker’s sight: fraction to tune by and ∂ρ̇/∂UT1 from the checker’s own states.
 * @formula f_r/f_t = (1 − n·v_r/c)/(1 − n·v_t/c) · √((1 − v_t²/c²)/(1 − v_r²/c²)); ∂ρ̇ = (∂d·w + d·∂w)/ρ − ρ̇·(d·∂d)/ρ²
 * @source special relativity; mechanics
 * @units UTC ms of the station → dimensionless, m/s²
 * @frame TEME axes, taken as not turning
 * @range where there are states; gravity, ionosphere, troposphere left out
 * @tolerance 0.05, 0.2, 0.5 Hz at 437.5, 2245, 8200 MHz of independent programs (plan/check-curve.test.ts)
 */
export function sightOf({ stateInto }: CheckStates, site: Site, ut1MinusUtcS: number, direction: Direction, aboutMs: UtcMs): Sight {
  const [fixedX, fixedY, z] = sitePosition(site)
  const fromAxisM = Math.sqrt(fixedX * fixedX + fixedY * fixedY)
  const speedMps = EARTH_ROTATION_RAD_PER_S * fromAxisM
  // The Earth turns evenly: its rate drifts by 5e-17 of itself a day.
  const eastRad = gmstRad(ut1Of(aboutMs, ut1MinusUtcS)) + Math.atan2(fixedY, fixedX)
  const sign = direction === 'downlink' ? -1 : 1
  const state = new Float64Array(6)
  let byUt1 = NaN

  const tunedMinusOne = (utcMs: UtcMs): number => {
    const turned = eastRad + EARTH_ROTATION_RAD_PER_S * (utcMs - aboutMs) / 1000
    const cos = Math.cos(turned)
    const sin = Math.sin(turned)
    const sx = fromAxisM * cos
    const sy = fromAxisM * sin
    const ux = -speedMps * sin
    const uy = speedMps * cos

    stateInto(utcMs, state)
    let dx = state[0]! - sx
    let dy = state[1]! - sy
    let dz = state[2]! - z
    const range2 = dx * dx + dy * dy + dz * dz
    const nearM = Math.sqrt(range2)
    const wx = state[3]! - ux
    const wy = state[4]! - uy
    const closing = dx * wx + dy * wy + dz * state[5]!
    const turning = EARTH_ROTATION_RAD_PER_S * speedMps * (dx * cos + dy * sin) - ux * wx - uy * wy
    byUt1 = (turning + closing * (dx * ux + dy * uy) / range2) / nearM

    // Where light meets the spacecraft. An instant in ms, as a double, is good to 0.24 µs: the rest is bridged.
    const firstS = sign * nearM / C
    const metMs = utcMs + firstS * 1000
    const known = stateInto(metMs, state)
    const vx = state[3]!
    const vy = state[4]!
    const vz = state[5]!
    const doneS = known ? (metMs - utcMs) / 1000 : 0
    let tau = firstS
    for (let round = 0; round < 2; round++) {
      dx = state[0]! + (tau - doneS) * vx - sx
      dy = state[1]! + (tau - doneS) * vy - sy
      dz = state[2]! + (tau - doneS) * vz - z
      tau = sign * Math.sqrt(dx * dx + dy * dy + dz * dz) / C
    }
    const toRay = sign / (Math.sqrt(dx * dx + dy * dy + dz * dz) * C)
    const craft = (dx * vx + dy * vy + dz * vz) * toRay
    const station = (dx * ux + dy * uy) * toRay
    const craft2 = (vx * vx + vy * vy + vz * vz) / (C * C)
    const station2 = speedMps * speedMps / (C * C)
    if (direction === 'downlink') return ratioMinusOne(craft, station, craft2, station2)
    const offset = ratioMinusOne(station, craft, station2, craft2)
    return -offset / (1 + offset)
  }
  return { tunedMinusOne, rangeRateByUt1: () => byUt1 }
}
