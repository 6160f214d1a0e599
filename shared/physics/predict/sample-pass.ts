import type { Direction, Ephemeris, Hz, Look, PredictedPass, Site, Turnaround, UtcMs } from '../types'
import { createNeededFrequency } from '../doppler/needed'
import { lookAt } from '../orbit/look'

/** Two samples closer than this would bear the same millisecond. */
const SAME_INSTANT_MS = 0.5

export interface SampleOptions {
  readonly ephemeris: Ephemeris
  readonly site: Site
  readonly direction: Direction
  readonly carrierHz: Hz
  readonly turnaround?: Turnaround | null
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
function sampleTimes(pass: PredictedPass, stepMs: number): UtcMs[] {
  const fixed = [pass.aosMs, pass.culminationMs, pass.losMs]
  const isFree = (t: UtcMs): boolean => fixed.every(other => Math.abs(other - t) >= SAME_INSTANT_MS)
  const stepped: UtcMs[] = []
  for (let k = 1; pass.aosMs + k * stepMs < pass.losMs; k++) stepped.push(pass.aosMs + k * stepMs)
  const distinct = fixed.filter((t, i) => fixed.slice(0, i).every(other => Math.abs(other - t) >= SAME_INSTANT_MS))
  return [...distinct, ...stepped.filter(isFree)].sort((a, b) => a - b)
}

/**
 * What an antenna and a radio see through a pass: look angles, Doppler and its rate at each sample.
 *
 * @card Samples of a pass: angles, Doppler and its rate at even steps, at culmination and at both ends.
 * @formula look angles and needed frequency at AOS + k·step
 * @source the cards of each
 * @units UTC ms, s → rad, m, m/s, Hz, Hz/s
 * @frame station’s horizon; TEME axes
 * @range steps above 0
 * @tolerance 0.05 Hz and 0.01 m/s at 437.5 MHz (predict/sample-pass.test.ts)
 */
export function samplePass(pass: PredictedPass, options: SampleOptions): PassSample[] {
  const { ephemeris, site, ut1MinusUtcS, stepS } = options
  if (!(stepS > 0)) throw new RangeError(`stepS is ${stepS}: give a positive number of seconds`)
  const needed = createNeededFrequency({ ...options, stateAt: ephemeris.stateAt })
  return sampleTimes(pass, stepS * 1000).map((atMs) => {
    const state = ephemeris.stateAt(atMs)
    if (!state) throw new RangeError(`No state at ${atMs}: make the ephemeris cover the pass`)
    return {
      atMs,
      ...lookAt(state, site, atMs, ut1MinusUtcS),
      dopplerHz: needed.dopplerHz(atMs),
      dopplerRateHzPerS: needed.rateHzPerS(atMs),
    }
  })
}
