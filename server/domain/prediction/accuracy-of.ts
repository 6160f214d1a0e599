import { and, desc, eq, ne } from 'drizzle-orm'
import { priorFor } from '#shared/physics/accuracy/prior'
import type { MeanElements } from '#shared/physics/types'
import type { AccuracyOut } from '#shared/schemas/spacecraft'
import { elementSets, spacecraft } from '~~/server/database/schema'
import type { LearnedWithPairs } from '~~/server/workers/tasks/learn-accuracy'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { readSettings } from '../settings/read-settings'
import type { AccuracyQuery } from './learned-accuracy'
import { accuracyWithPairs, learnedAccuracy } from './learned-accuracy'
import type { SpacecraftRow } from './models'

const MOST_PAIRS = 600

/** How fast a spacecraft's element sets go wrong as predictions have it now, with what was learned beside what is stated. */
export async function accuracyOf({ db }: Pick<Deps, 'db'>, id: string, { pairs = false }: { pairs?: boolean } = {}): Promise<AccuracyOut> {
  const [row] = await db.select().from(spacecraft).where(eq(spacecraft.id, id))
  const craft = requireFound(row, 'spacecraft')
  const settings = await readSettings(db)
  const elements = await elementsOf({ db }, craft)
  // Its perigee unknown, it is taken to fly low, where elements age fastest.
  const prior = elements ? priorFor(elements, settings.prior) : { floorKm: settings.prior.lowFloorKm, growthKmPerDay: settings.prior.lowGrowthKmPerDay }
  const nothing = { learned: { source: 'prior' as const, pairs: 0, bins: [], ...prior }, pairs: [] }
  const { learned, pairs: shown } = elements ? await learn({ db }, { spacecraftId: id, elements, settings }, pairs) : nothing
  const isStated = craft.alongTrackFloorKm !== null || craft.alongTrackGrowthKmPerDay !== null
  return {
    source: isStated ? 'stated' : learned.source,
    pairs: learned.pairs,
    floorKm: craft.alongTrackFloorKm ?? learned.floorKm,
    growthKmPerDay: craft.alongTrackGrowthKmPerDay ?? learned.growthKmPerDay,
    bins: [...learned.bins],
    prior: { floorKm: prior.floorKm, growthKmPerDay: prior.growthKmPerDay },
    ...(pairs ? { errors: shown } : {}),
  }
}

async function learn(deps: Pick<Deps, 'db'>, query: AccuracyQuery, pairs: boolean): Promise<LearnedWithPairs> {
  return pairs ? accuracyWithPairs(deps, query, MOST_PAIRS) : { learned: await learnedAccuracy(deps, query), pairs: [] }
}

/** Of the set in use, else of the newest that is not refused. */
async function elementsOf({ db }: Pick<Deps, 'db'>, craft: SpacecraftRow): Promise<MeanElements | null> {
  const wanted = craft.inUseSetId ? eq(elementSets.id, craft.inUseSetId) : and(eq(elementSets.spacecraftId, craft.id), ne(elementSets.state, 'refused'))
  const [set] = await db.select({ elements: elementSets.elements }).from(elementSets).where(wanted).orderBy(desc(elementSets.epoch), desc(elementSets.id)).limit(1)
  return set?.elements ?? null
}
