import { createHash } from 'node:crypto'
import { and, desc, eq, inArray, lte, ne } from 'drizzle-orm'
import type { LearnedAccuracy } from '#shared/physics/accuracy/learned'
import { MOST_SETS } from '#shared/physics/accuracy/pairs'
import { priorFor } from '#shared/physics/accuracy/prior'
import type { MeanElements } from '#shared/physics/types'
import type { Settings } from '#shared/schemas/settings'
import { elementSets } from '~~/server/database/schema'
import { runTask } from '~~/server/workers/pool'
import type { Deps } from '../context'

const MOST_KEPT = 500
/** Answers by what they were made from; sets never change once held, so nothing here grows stale. */
const kept = new Map<string, LearnedAccuracy>()

export interface AccuracyQuery {
  readonly spacecraftId: string
  /** Of the set that predictions are made with. */
  readonly elements: MeanElements
  readonly settings: Pick<Settings, 'prior'>
}

/**
 * How fast a spacecraft's sets go wrong, learned from all its sets but refused ones up to the epoch of the one that is
 * predicted with. Later ones wait to be put into use, and change nothing until then: what comes every night must not set
 * every table moving before a person has looked at it. The computing runs in a worker, once for the same sets and prior.
 */
export async function learnedAccuracy({ db }: Pick<Deps, 'db'>, { spacecraftId, elements, settings }: AccuracyQuery): Promise<LearnedAccuracy> {
  const prior = priorFor(elements, settings.prior)
  const held = await db.select({ id: elementSets.id }).from(elementSets)
    .where(and(eq(elementSets.spacecraftId, spacecraftId), ne(elementSets.state, 'refused'), lte(elementSets.epochUtcUs, elements.epochUtcUs)))
    .orderBy(desc(elementSets.epoch), desc(elementSets.id)).limit(MOST_SETS)
  const ids = held.map(({ id }) => id).sort()
  const key = createHash('sha256').update(JSON.stringify([prior, ids])).digest('hex')
  const known = kept.get(key)
  if (known) return known
  const sets = ids.length > 0 ? await db.select({ elements: elementSets.elements }).from(elementSets).where(inArray(elementSets.id, ids)) : []
  const learned = await runTask('learn-accuracy', { sets: sets.map(set => set.elements), prior })
  if (kept.size >= MOST_KEPT) kept.delete(kept.keys().next().value!)
  kept.set(key, learned)
  return learned
}
