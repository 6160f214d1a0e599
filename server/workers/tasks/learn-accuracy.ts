import type { LearnedAccuracy } from '#shared/physics/accuracy/learned'
import { learnAccuracy } from '#shared/physics/accuracy/learned'
import { agedErrors } from '#shared/physics/accuracy/pairs'
import type { AlongTrackGrowth } from '#shared/physics/accuracy/prior'
import { meanSpeedMps } from '#shared/physics/accuracy/prior'
import type { MeanElements, Span } from '#shared/physics/types'

export interface LearnAccuracyInput {
  readonly sets: readonly MeanElements[]
  readonly manoeuvres: readonly Span[]
  readonly prior: AlongTrackGrowth
  /** How many pairs to hand out beside what they teach. */
  readonly mostErrors: number
}

/** How far a set, grown so old, was from a later one along the track; positive where it ran ahead. */
export interface ShownPair { readonly ageDays: number, readonly alongKm: number }
export interface LearnedWithPairs { readonly learned: LearnedAccuracy, readonly pairs: ShownPair[] }

export function learnAccuracyTask({ sets, manoeuvres, prior, mostErrors }: LearnAccuracyInput): LearnedWithPairs {
  return { learned: learnAccuracy(sets, prior, manoeuvres), pairs: mostErrors > 0 ? shown(sets, manoeuvres, mostErrors) : [] }
}

function shown(sets: readonly MeanElements[], manoeuvres: readonly Span[], most: number): ShownPair[] {
  const newest = sets.reduce<MeanElements | null>((last, set) => last && last.epochUtcUs >= set.epochUtcUs ? last : set, null)
  if (!newest) return []
  const kmPerS = meanSpeedMps(newest) / 1000
  const errors = agedErrors(sets, manoeuvres).sort((a, b) => a.ageDays - b.ageDays)
  const every = Math.max(1, Math.ceil(errors.length / most))
  return errors.filter((_, i) => i % every === 0).map(error => ({ ageDays: Number(error.ageDays.toFixed(3)), alongKm: Number((error.timingS * kmPerS).toFixed(3)) }))
}
