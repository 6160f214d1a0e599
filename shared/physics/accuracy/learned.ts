import type { MeanElements, Span } from '../types'
import { ageBins, fitGrowth } from './fit-growth'
import { agedErrors } from './pairs'
import type { AlongTrackGrowth } from './prior'
import { meanSpeedMps } from './prior'

/** From this many pairs on the prior's growth no longer counts. */
export const ENOUGH_PAIRS = 10
/** Significant ones, of all that is answered. */
const DIGITS = 3

export interface AccuracyBin { readonly ageDays: number, readonly sigmaKm: number, readonly pairs: number }

export interface LearnedAccuracy extends AlongTrackGrowth {
  /** Prior: no pair to learn from. */
  readonly source: 'learned' | 'prior'
  readonly pairs: number
  readonly bins: readonly AccuracyBin[]
}

/**
 * How fast a spacecraft's element sets go wrong, from its own sets: one sigma along track at the epoch (km) and its
 * growth (km/day), for `alongTrackSigmaS`. Timing errors of pairs (`agedErrors`), their spread by age (`ageBins`), a line
 * through it (`fitGrowth`); distances by the mean speed of the newest set.
 *
 * Fewer than ten pairs count for pairs/10 and the prior for the rest. The floor is never below the prior's, since
 * differences hide what all sets have in common. Three significant digits: a pair more must not move what rests on it.
 * Method: Osweiler 2006. With 60 sets the growth is good to about a quarter.
 *
 * @card Learned accuracy: how fast a spacecraft’s own sets go wrong, in place of the prior.
 * @formula floor and growth of σ_t(age) times n·a; pairs/10 of it and the prior for the rest under ten pairs; floor ≥ the prior’s
 * @source Osweiler 2006; prior: Flohrer 2008, Levit and Marshall 2011, Riesing 2015
 * @units element sets → km, km/day
 * @frame along the orbit
 * @range the newest 100 sets, ages to 14 days
 * @tolerance 10 % of a floor or a growth alone with 60 sets of known error, 25 % together (accuracy/learned.test.ts)
 */
export function learnAccuracy(sets: readonly MeanElements[], prior: AlongTrackGrowth, manoeuvres: readonly Span[] = []): LearnedAccuracy {
  const errors = agedErrors(sets, manoeuvres)
  const newest = sets.reduce<MeanElements | null>((last, set) => last && last.epochUtcUs >= set.epochUtcUs ? last : set, null)
  if (errors.length === 0 || !newest) return { source: 'prior', pairs: 0, bins: [], ...prior }
  const kmPerS = meanSpeedMps(newest) / 1000
  const bins = ageBins(errors)
  const fit = fitGrowth(bins, prior.floorKm / kmPerS)!
  const share = Math.min(1, errors.length / ENOUGH_PAIRS)
  const blend = (learned: number, before: number): number => significant(share * learned + (1 - share) * before)
  return {
    source: 'learned',
    pairs: errors.length,
    floorKm: Math.max(prior.floorKm, blend(fit.floorS * kmPerS, prior.floorKm)),
    growthKmPerDay: blend(fit.growthSPerDay * kmPerS, prior.growthKmPerDay),
    bins: bins.map(bin => ({ ageDays: significant(bin.ageDays), sigmaKm: significant(bin.sigmaS * kmPerS), pairs: bin.pairs })),
  }
}

const significant = (value: number): number => Number(value.toPrecision(DIGITS))
