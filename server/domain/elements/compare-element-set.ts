import { and, asc, eq, isNull } from 'drizzle-orm'
import { allowanceOf } from '#shared/physics/link/allowance'
import type { MeanElements } from '#shared/physics/types'
import type { ComparisonOut } from '#shared/schemas/elements'
import { elementSets, links, spacecraft, stations } from '~~/server/database/schema'
import { runTask } from '~~/server/workers/pool'
import type { Deps } from '../context'
import { learnedAccuracy } from '../prediction/learned-accuracy'
import type { SpacecraftRow } from '../prediction/models'
import { alongTrackOf, linkModelOf, siteOf } from '../prediction/models'
import { readSettings } from '../settings/read-settings'
import { ut1InForce } from '../settings/ut1-in-force'
import { findSet } from './use-element-set'

const SPAN_MS = 48 * 3_600_000
const DAY_MS = 86_400_000

/**
 * Shift of prediction: the passes of the next 48 h over every station by this set against those by the set in use,
 * per link against its allowance, and warnings with their reasons. Without a set in use every pass is new.
 */
export async function compareElementSet({ db, now }: Pick<Deps, 'db' | 'now'>, { id }: { id: string }): Promise<ComparisonOut> {
  const set = await findSet(db, id)
  const [craft] = set.spacecraftId ? await db.select().from(spacecraft).where(eq(spacecraft.id, set.spacecraftId)) : []
  const [inUse] = craft?.inUseSetId ? await db.select().from(elementSets).where(eq(elementSets.id, craft.inUseSetId)) : []
  const stationRows = await db.select().from(stations).where(isNull(stations.retiredAt)).orderBy(asc(stations.name))
  const linkRows = craft ? await db.select().from(links).where(and(eq(links.spacecraftId, craft.id), isNull(links.retiredAt))).orderBy(asc(links.name)) : []
  const settings = await readSettings(db)
  // What flies now says how far a set may be from it; the candidate must not excuse itself.
  const accuracyOf = async (craft: SpacecraftRow, elements: MeanElements) =>
    alongTrackOf(craft, elements, await learnedAccuracy({ db }, { spacecraftId: craft.id, elements: (inUse ?? set).elements, settings }))

  const fromMs = now.getTime()
  const { warnings, passes } = await runTask('compare-sets', {
    candidate: { elements: set.elements, accuracy: craft ? await accuracyOf(craft, set.elements) : null },
    inUse: craft && inUse ? { elements: inUse.elements, accuracy: await accuracyOf(craft, inUse.elements) } : null,
    stations: stationRows.map(row => ({ id: row.id, site: siteOf(row) })),
    links: linkRows.map(({ id, direction, carrierHz, turnaroundNumerator }) => ({ id, direction, carrierHz, isCoherent: turnaroundNumerator !== null })),
    fromMs, toMs: fromMs + SPAN_MS, horizonEndMs: fromMs + settings.horizonDays * DAY_MS,
    ut1MinusUtcS: ut1InForce(settings, now).ut1MinusUtcS,
  })

  const stationNames = new Map(stationRows.map(row => [row.id, row.name]))
  const linkFacts = new Map(linkRows.map(row => [row.id, { linkName: row.name, allowanceHz: allowanceOf(linkModelOf(row)).allowanceHz }]))
  return {
    setId: id,
    inUseSetId: craft?.inUseSetId ?? null,
    warnings,
    passes: passes.map(({ aosMs, links, ...pass }) => ({
      ...pass,
      stationName: stationNames.get(pass.stationId)!,
      aos: new Date(aosMs).toISOString(),
      links: links.map(({ id: linkId, worstShiftHz }) => ({ linkId, ...linkFacts.get(linkId)!, worstShiftHz })),
    })),
  }
}
