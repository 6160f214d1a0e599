import { createHash } from 'node:crypto'
import { and, desc, eq, inArray, lte, ne } from 'drizzle-orm'
import type { LearnedAccuracy } from '#shared/physics/accuracy/learned'
import { MOST_SETS } from '#shared/physics/accuracy/pairs'
import { priorFor } from '#shared/physics/accuracy/prior'
import type { MeanElements } from '#shared/physics/types'
import type { Settings } from '#shared/schemas/settings'
import { elementSets } from '~~/server/database/schema'
import { runTask } from '~~/server/workers/pool'
import type { LearnedWithPairs } from '~~/server/workers/tasks/learn-accuracy'
import type { Deps } from '../context'
import { manoeuvresOf, windowsOf } from '../manoeuvres/manoeuvres-of'

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
 * every table moving before a person has looked at it. What lies across a manoeuvre says nothing of the sets and is left
 * out. The computing runs in a worker, once for the same sets, manoeuvres and prior.
 */
export async function learnedAccuracy({ db }: Pick<Deps, 'db'>, { spacecraftId, elements, settings }: AccuracyQuery): Promise<LearnedAccuracy> {
  const { prior, ids, manoeuvres } = await sourcesOf({ db }, { spacecraftId, elements, settings })
  const key = createHash('sha256').update(JSON.stringify([prior, ids, manoeuvres])).digest('hex')
  const known = kept.get(key)
  if (known) return known
  const { learned } = await runTask('learn-accuracy', { sets: await elementsOf({ db }, ids), manoeuvres, prior, mostErrors: 0 })
  if (kept.size >= MOST_KEPT) kept.delete(kept.keys().next().value!)
  kept.set(key, learned)
  return learned
}

/** The same with the pairs that it was learned from, at most `mostErrors` of them, evenly over their number. */
export async function accuracyWithPairs({ db }: Pick<Deps, 'db'>, query: AccuracyQuery, mostErrors: number): Promise<LearnedWithPairs> {
  const { prior, ids, manoeuvres } = await sourcesOf({ db }, query)
  return runTask('learn-accuracy', { sets: await elementsOf({ db }, ids), manoeuvres, prior, mostErrors })
}

async function sourcesOf({ db }: Pick<Deps, 'db'>, { spacecraftId, elements, settings }: AccuracyQuery) {
  const held = await db.select({ id: elementSets.id }).from(elementSets)
    .where(and(eq(elementSets.spacecraftId, spacecraftId), ne(elementSets.state, 'refused'), lte(elementSets.epochUtcUs, elements.epochUtcUs)))
    .orderBy(desc(elementSets.epoch), desc(elementSets.id)).limit(MOST_SETS)
  return { prior: priorFor(elements, settings.prior), ids: held.map(({ id }) => id).sort(), manoeuvres: windowsOf(await manoeuvresOf({ db }, spacecraftId)) }
}

async function elementsOf({ db }: Pick<Deps, 'db'>, ids: string[]): Promise<MeanElements[]> {
  if (ids.length === 0) return []
  return (await db.select({ elements: elementSets.elements }).from(elementSets).where(inArray(elementSets.id, ids))).map(set => set.elements)
}
