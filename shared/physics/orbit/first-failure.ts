import type { PropagationError, Propagator, StateTeme, UtcMs } from '../types'
import { findMaximum } from './refine'
import { dot, norm, type Triple } from './vector'

const END_TOLERANCE_MS = 0.1
const PERIGEE_TOLERANCE_MS = 1
/** SGP4 gives a spacecraft up as decayed below 6378.135 km. From 100 km above, its perigee is looked at. */
const LOW_M = 6_478_135
/** m³/s², WGS-72 as SGP4 has it. */
const GM = 398_600.8e9
const SPARSE_REVOLUTIONS = 0.21
const DENSE_REVOLUTIONS = 0.02
const MOST_SPARSE = 2_000
const MOST_DENSE = 20_000

export interface Failure { readonly ms: UtcMs, readonly error: PropagationError }

/** Radii at three instants in a row, m. */
export type Radii = readonly [before: number, here: number, after: number]

/**
 * Whether SGP4 fails between two instants at which it does not, around a perigee: where of three radii, the first and the last at
 * these instants, the middle one is least and low. Near decay the errors come and go: a set whose perigee alone lies below the
 * ground fails for seconds in each revolution.
 *
 * @card Failure at a perigee: whether a set fails for moments between two instants at which it is good.
 * @formula radius(t) least, golden section; SGP4’s own check r < 6378.135 km
 * @source error 6 of Vallado, Crawford, Hujsak, Kelso, AIAA 2006-6753
 * @units UTC ms → UTC ms
 * @frame TEME
 * @range one perigee between the instants
 * @tolerance a millisecond of failing (orbit/first-failure.test.ts)
 */
export function failureAtPerigee(propagator: Propagator, [before, here, after]: Radii, fromMs: UtcMs, toMs: UtcMs): Failure | null {
  if (here >= LOW_M || here > before || here > after) return null
  const failures: Failure[] = []
  findMaximum((ms) => {
    const result = propagator.at(ms)
    if (result.ok) return -norm(result.positionM as Triple)
    failures.push({ ms, error: result.error })
    // Nowhere is lower than where it has sunk into the Earth.
    return 0
  }, fromMs, toMs, PERIGEE_TOLERANCE_MS)
  return failures[0] ?? null
}

/**
 * The error by which a set has failed between its epoch and a window: sampled sparsely, and at every perigee where the orbit of the
 * window's start comes low. Null where it has not.
 *
 * @card Failure before a window: whether a set has ended between its epoch and the window asked for.
 * @formula first error of SGP4 among samples, five a revolution, and at each perigee below 100 km
 * @source error codes of Vallado, Crawford, Hujsak, Kelso, AIAA 2006-6753
 * @units UTC ms → error
 * @frame TEME
 * @range epoch to window; at most 2,000 samples, 20,000 of orbits that come low
 * @tolerance as SGP4 asked every second (orbit/first-failure.test.ts)
 */
export function errorBefore(propagator: Propagator, fromMs: UtcMs, atStart: StateTeme | null): PropagationError | null {
  const epochMs = propagator.elements.epochUtcUs / 1000
  const revolutionMs = 86_400_000 / propagator.elements.meanMotionRevPerDay
  const isLow = atStart === null || perigeeRadiusM(atStart) < LOW_M
  const stepMs = Math.max((isLow ? DENSE_REVOLUTIONS : SPARSE_REVOLUTIONS) * revolutionMs, (fromMs - epochMs) / (isLow ? MOST_DENSE : MOST_SPARSE))
  let [before, here] = [Infinity, Infinity]
  // One sample beyond the window's start, for a perigee just before it.
  for (let ms = epochMs; ms < fromMs + 2 * stepMs && fromMs > epochMs; ms += stepMs) {
    const result = propagator.at(ms)
    if (!result.ok) return ms <= fromMs ? result.error : null
    const after = norm(result.positionM as Triple)
    const failure = isLow ? failureAtPerigee(propagator, [before, here, after], Math.max(epochMs, ms - 2 * stepMs), ms) : null
    if (failure && failure.ms < fromMs) return failure.error
    before = here
    here = after
  }
  return null
}

/** Perigee of the orbit that a state is on, m (two bodies). */
function perigeeRadiusM({ positionM, velocityMps }: StateTeme): number {
  const r = positionM as Triple
  const v = velocityMps as Triple
  const parameter = (dot(r, r) * dot(v, v) - dot(r, v) ** 2) / GM
  const energy = dot(v, v) / 2 - GM / norm(r)
  return parameter / (1 + Math.sqrt(Math.max(0, 1 + 2 * energy * parameter / GM)))
}

/**
 * The last good instant between a good one and a failing one, to 0.1 ms; one change between them.
 *
 * @card End of a set: the last instant before SGP4 fails.
 * @formula bisection
 * @source mechanics
 * @units UTC ms → UTC ms
 * @frame none
 * @range one change from good to failing between the instants
 * @tolerance 1 ms (orbit/first-failure.test.ts)
 */
export function validUntil(propagator: Propagator, validMs: UtcMs, failingMs: UtcMs): UtcMs {
  let [valid, failing] = [validMs, failingMs]
  while (failing - valid > END_TOLERANCE_MS) {
    const middle = (valid + failing) / 2
    if (propagator.at(middle).ok) valid = middle
    else failing = middle
  }
  return valid
}
