import type { Ephemeris, MeanElements, Propagator, StateTeme, UtcMs } from '../types'
import { errorBefore, failureAtPerigee, validUntil, type Failure } from './first-failure'
import { norm, type Triple } from './vector'

/** Nodes an interpolation uses, and their barycentric weights on an even grid, (−1)^j·C(9, j) (Berrut, Trefethen 2004). */
export const NODES = 10
export const WEIGHTS = [1, -9, 36, -84, 126, -126, 84, -36, 9, -1] as const
export const BEFORE = NODES / 2 - 1

/** What the ephemeris covers beyond the span asked for, so that light time and differences reach over its edges. */
export const EPHEMERIS_PAD_MS = 5_000

/** What an interpolated midpoint may differ from SGP4's own before its neighbourhood is propagated instead. */
const MIDPOINT_TOLERANCE_M = 1e-3
const MIDPOINT_TOLERANCE_MPS = 1e-5
const UNTRIED = 0
const SMOOTH = 1
const ROUGH = 2

/**
 * Step between propagated nodes, ms. Short against the orbit's own motion (0.07 rad of mean anomaly) and against the
 * time in which an eccentric orbit sweeps through perigee: the distance of the nearest complex singularity of Kepler's
 * equation from the real axis, (acosh(1/e) − √(1−e²))/n (Hagihara 1970, from memory), in twentieths.
 *
 * @card Grid step: how far apart in time states are propagated before they are interpolated.
 * @formula least of 0.07/n and (acosh(1/e) − √(1 − e²))/(20·n), in whole seconds, at least 1 s
 * @source Hagihara 1970, singularities of Kepler’s equation (from memory)
 * @units rev/day, eccentricity → ms
 * @frame none
 * @range e in [0, 1)
 * @tolerance none of its own: the interpolation that it serves is held (orbit/ephemeris.test.ts)
 */
export function gridStepMs(elements: MeanElements): number {
  const radPerS = elements.meanMotionRevPerDay * 2 * Math.PI / 86_400
  const e = Math.max(elements.eccentricity, 1e-6)
  const perigeeS = (Math.acosh(1 / e) - Math.sqrt(1 - e * e)) / radPerS
  return Math.max(1, Math.floor(Math.min(0.07 / radPerS, perigeeS / 20))) * 1000
}

/**
 * States of a spacecraft over a span by interpolation between propagated nodes: position and velocity each by
 * themselves (SGP4's velocity is not exactly the derivative of its position), degree 9 on an even grid tied to the
 * calendar, so that another span gives the same state at the same instant.
 *
 * Within 10 mm and 0.1 mm/s of SGP4 itself: each interval is tried at its midpoint when first used, and where that or a
 * neighbour's is more than 1 mm or 0.01 mm/s off (SGP4 has kinks and steps: its eccentricity is held above 1e-6, its
 * resonances are integrated in half days), or too few nodes are left beside an end, the answer is SGP4's own.
 *
 * `fromMs` and `toMs` of the answer reach 5 s beyond what was asked, where SGP4 does. The first propagation error since the
 * epoch ends it, named in `endedBy`, be it for seconds at a perigee; nothing later is used, since near decay errors come and go.
 *
 * @card Interpolated states: position and velocity between propagated nodes, each by itself.
 * @formula x(t) = Σ w_j x_j/(t − t_j) / Σ w_j/(t − t_j), ten even nodes, w_j = (−1)^j·C(9, j)
 * @source Berrut, Trefethen, SIAM Review 46 (2004) 501
 * @units UTC ms → m, m/s
 * @frame TEME
 * @range the span asked for and 5 s beyond, until the first error of SGP4
 * @tolerance 1 mm and 0.01 mm/s of SGP4 in low orbit, 10 mm and 0.1 mm/s elsewhere (orbit/ephemeris.test.ts)
 */
export function createEphemeris(propagator: Propagator, fromMs: UtcMs, toMs: UtcMs, options: { readonly stepMs?: number } = {}): Ephemeris {
  if (!(toMs >= fromMs)) throw new RangeError('The span ends before it begins: give fromMs ≤ toMs')
  const stepMs = options.stepMs ?? gridStepMs(propagator.elements)
  if (!(stepMs > 0)) throw new RangeError(`stepMs is ${stepMs}: give a positive number of milliseconds`)

  const atStart = propagator.at(fromMs)
  const failedBefore = errorBefore(propagator, fromMs, atStart.ok ? atStart : null)
  if (failedBefore || !atStart.ok) {
    const endedBy = failedBefore ?? (atStart.ok ? null : atStart.error)
    return { fromMs, toMs: fromMs, endedBy, propagator, stateAt: () => null }
  }

  const startMs = propagator.at(fromMs - EPHEMERIS_PAD_MS).ok ? fromMs - EPHEMERIS_PAD_MS : fromMs
  const firstNode = Math.floor(startMs / stepMs) - BEFORE
  const lastNode = Math.ceil((toMs + EPHEMERIS_PAD_MS) / stepMs) + BEFORE + 1
  const data = new Float64Array(6 * (lastNode - firstNode + 1))
  let usableFrom = firstNode
  let usableTo = firstNode - 1
  let failing: Failure | null = null
  let [before, here] = [Infinity, Infinity]
  for (let node = firstNode; node <= lastNode && !failing; node++) {
    const result = propagator.at(node * stepMs)
    if (result.ok) {
      const after = norm(result.positionM as Triple)
      const hidden = failureAtPerigee(propagator, [before, here, after], (node - 2) * stepMs, node * stepMs)
      if (hidden && hidden.ms > fromMs) {
        failing = hidden
        usableTo = node - 2
        break
      }
      before = here
      here = after
      data.set(result.positionM, 6 * (node - firstNode))
      data.set(result.velocityMps, 6 * (node - firstNode) + 3)
      usableTo = node
    }
    else if (node * stepMs < startMs) usableFrom = node + 1
    else failing = { ms: node * stepMs, error: result.error }
  }
  const wantedEndMs = toMs + EPHEMERIS_PAD_MS
  let endMs = wantedEndMs
  if (failing) endMs = Math.min(wantedEndMs, validUntil(propagator, Math.max(fromMs, usableTo * stepMs), failing.ms))
  const endedBy = failing && endMs < toMs ? failing.error : null

  const hasStencil = (left: number): boolean => left - BEFORE >= usableFrom && left - BEFORE + NODES - 1 <= usableTo
  const tried = new Uint8Array(lastNode - firstNode + 1)
  const isSmooth = (left: number): boolean => {
    if (!hasStencil(left)) return true
    const index = left - firstNode
    if (tried[index] === UNTRIED) {
      const direct = propagator.at((left + 0.5) * stepMs)
      tried[index] = direct.ok && areClose(direct, interpolate(data, index - BEFORE, 0.5)) ? SMOOTH : ROUGH
    }
    return tried[index] === SMOOTH
  }
  const isInterpolated = (left: number): boolean => hasStencil(left) && isSmooth(left) && isSmooth(left - 1) && isSmooth(left + 1)
  const stateAt = (utcMs: UtcMs): StateTeme | null => {
    if (!(utcMs >= startMs && utcMs <= endMs)) return null
    const left = Math.floor(utcMs / stepMs)
    const share = (utcMs - left * stepMs) / stepMs
    const isNode = share === 0 && left >= usableFrom && left <= usableTo
    if (isNode) return nodeState(data, left - firstNode)
    if (isInterpolated(left)) {
      return interpolate(data, left - BEFORE - firstNode, share)
    }
    const direct = propagator.at(utcMs)
    return direct.ok ? direct : null
  }
  const ephemeris: Ephemeris = { fromMs: startMs, toMs: endMs, endedBy, propagator, stateAt }
  grids.set(ephemeris, { stepMs, firstNode, usableFrom, usableTo, states: data, isInterpolated })
  return ephemeris
}

/** The propagated nodes of an ephemeris, for who interpolates many functions of them at one instant. */
export interface EphemerisGrid {
  readonly stepMs: number
  /** Node n stands at n·stepMs; `states` begins with this one: position (m) and velocity (m/s) in TEME, six numbers a node. */
  readonly firstNode: number
  /** Nodes that SGP4 has a state for. */
  readonly usableFrom: number
  readonly usableTo: number
  readonly states: Float64Array
  /** Whether interpolation between node `left` and the next is good; elsewhere ask the propagator. */
  readonly isInterpolated: (left: number) => boolean
}

const grids = new WeakMap<Ephemeris, EphemerisGrid>()

/** Null for an ephemeris that is empty or not made here. */
export const gridOf = (ephemeris: Ephemeris): EphemerisGrid | null => grids.get(ephemeris) ?? null

function areClose(a: StateTeme, b: StateTeme): boolean {
  const apart = (p: readonly number[], q: readonly number[]): number => Math.hypot(p[0]! - q[0]!, p[1]! - q[1]!, p[2]! - q[2]!)
  return apart(a.positionM, b.positionM) <= MIDPOINT_TOLERANCE_M && apart(a.velocityMps, b.velocityMps) <= MIDPOINT_TOLERANCE_MPS
}

function nodeState(data: Float64Array, index: number): StateTeme {
  const at = 6 * index
  return { positionM: [data[at]!, data[at + 1]!, data[at + 2]!], velocityMps: [data[at + 3]!, data[at + 4]!, data[at + 5]!] }
}

/** `share` of the step, above 0, between the fifth and the sixth of the ten nodes that start at `first`. */
function interpolate(data: Float64Array, first: number, share: number): StateTeme {
  let [x, y, z, vx, vy, vz, total] = [0, 0, 0, 0, 0, 0, 0]
  for (let j = 0; j < NODES; j++) {
    const weight = WEIGHTS[j]! / (BEFORE + share - j)
    const offset = 6 * (first + j)
    total += weight
    x += weight * data[offset]!
    y += weight * data[offset + 1]!
    z += weight * data[offset + 2]!
    vx += weight * data[offset + 3]!
    vy += weight * data[offset + 4]!
    vz += weight * data[offset + 5]!
  }
  return { positionM: [x / total, y / total, z / total], velocityMps: [vx / total, vy / total, vz / total] }
}
