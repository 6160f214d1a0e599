import type { AlongTrackModel } from '#shared/physics/accuracy/prior'
import { alongTrackSigmaS } from '#shared/physics/accuracy/prior'
import { createPropagator } from '#shared/physics/orbit/propagator'
import type { MeanElements, Propagator } from '#shared/physics/types'

export interface FitSetsInput {
  /** What flies now, by the sets in use. */
  readonly fleet: readonly { readonly id: string, readonly elements: MeanElements, readonly accuracy: AlongTrackModel }[]
  /** Sets that have come; `spacecraftId` is what they were taken for. */
  readonly sets: readonly { readonly id: string, readonly spacecraftId: string | null, readonly elements: MeanElements }[]
}
export interface Misfit {
  readonly setId: string
  readonly betterId: string
  readonly betterM: number
  /** From the spacecraft that it was taken for; null where it was taken for none. */
  readonly ownM: number | null
}

/** At one instant two orbits that cross can meet; over a revolution only one object is near itself. */
const INSTANTS = 8
/** Past this age a set in use says little about where its spacecraft is. */
const OLDEST_DAYS = 14
const DAY_MS = 86_400_000
/** What is not this alike is another orbit, and need not be propagated. */
const LIKE_INCLINATION_DEG = 1
const LIKE_MEAN_MOTION_SHARE = 0.02
const FARTHER = 10
const SIGMAS = 3

/**
 * Sets that fit another spacecraft far better than their own: over one revolution from the set's epoch they are more than
 * ten times as far from where their own is predicted, and farther than the age of the sets explains. A set that was taken
 * for nobody fits where it is as near as the age of that spacecraft's set explains.
 */
export function fitSets({ fleet, sets }: FitSetsInput): Misfit[] {
  const flying = fleet.flatMap(({ id, elements, accuracy }) => {
    const made = createPropagator(elements)
    return made.ok ? [{ id, propagator: made.propagator, accuracy }] : []
  })
  return sets.flatMap((set): Misfit[] => {
    const made = createPropagator(set.elements)
    if (!made.ok) return []
    const epochMs = set.elements.epochUtcUs / 1000
    const own = flying.find(craft => craft.id === set.spacecraftId)
    const ownM = own && isYoung(own.propagator, epochMs) ? distanceM(made.propagator, own.propagator) : null
    if (set.spacecraftId !== null && (ownM === null || !own || ownM <= spreadM(own.accuracy, epochMs))) return []
    let best: { id: string, accuracy: AlongTrackModel, atM: number } | null = null
    for (const { id, propagator, accuracy } of flying) {
      if (id === set.spacecraftId || !isYoung(propagator, epochMs) || !areAlike(propagator.elements, set.elements)) continue
      const atM = distanceM(made.propagator, propagator)
      if (atM !== null && atM < (best?.atM ?? Infinity)) best = { id, accuracy, atM }
    }
    const fits = best && (ownM === null ? best.atM <= spreadM(best.accuracy, epochMs) : ownM > FARTHER * best.atM)
    return best && fits ? [{ setId: set.id, betterId: best.id, betterM: best.atM, ownM }] : []
  })
}

/** How far the age of a set in use explains, m: that many sigma along the track at the epoch of what has come. */
export const spreadM = (accuracy: AlongTrackModel, epochMs: number): number => SIGMAS * alongTrackSigmaS(accuracy)(epochMs) * accuracy.speedMps

const isYoung = ({ elements }: Propagator, epochMs: number): boolean => Math.abs(elements.epochUtcUs / 1000 - epochMs) <= OLDEST_DAYS * DAY_MS

const areAlike = (a: MeanElements, b: MeanElements): boolean =>
  Math.abs(a.inclinationDeg - b.inclinationDeg) <= LIKE_INCLINATION_DEG && Math.abs(a.meanMotionRevPerDay / b.meanMotionRevPerDay - 1) <= LIKE_MEAN_MOTION_SHARE

/** Root mean square of the distance between two predictions over a revolution from the first one's epoch, m; null where one fails. */
function distanceM(set: Propagator, other: Propagator): number | null {
  const fromMs = set.elements.epochUtcUs / 1000
  const stepMs = DAY_MS / set.elements.meanMotionRevPerDay / INSTANTS
  let sum = 0
  for (let i = 0; i < INSTANTS; i++) {
    const [a, b] = [set.at(fromMs + i * stepMs), other.at(fromMs + i * stepMs)]
    if (!a.ok || !b.ok) return null
    for (const axis of [0, 1, 2] as const) sum += (a.positionM[axis] - b.positionM[axis]) ** 2
  }
  return Math.sqrt(sum / INSTANTS)
}
