import type { AccuracyOut } from '#shared/schemas/spacecraft'
import { ENOUGH_PAIRS } from '#shared/physics/accuracy/learned'
import { OLDEST_PAIR_DAYS } from '#shared/physics/accuracy/pairs'

const km = (value: number): string => `${Number(value.toPrecision(3))} km`
const pairsOf = (count: number): string => count === 1 ? 'one pair' : `${count} pairs`

/** Where a spacecraft's along-track accuracy comes from, in a few words. */
export function ageingSource({ source, pairs }: Pick<AccuracyOut, 'source' | 'pairs'>): string {
  if (source === 'stated') return 'stated on the spacecraft'
  return source === 'learned' ? `learned from ${pairsOf(pairs)} of its sets` : 'the prior in the settings'
}

/** One sigma along track at the epoch and by the day, with its source; and what is missing where it is not all learned. */
export function ageingSentence(accuracy: AccuracyOut): string {
  const { source, pairs, floorKm, growthKmPerDay } = accuracy
  const figures = `One sigma along track is ${km(floorKm)} at the epoch and grows by ${km(growthKmPerDay)} a day: ${ageingSource(accuracy)}.`
  if (source === 'stated') return pairs > 0 ? `${figures} Its sets show the rings (${pairsOf(pairs)}).` : figures
  if (source === 'prior') return `${figures} A second set within ${OLDEST_PAIR_DAYS} days begins to replace it.`
  return pairs < ENOUGH_PAIRS ? `${figures} Until there are ${ENOUGH_PAIRS} pairs the prior counts for the rest.` : figures
}
