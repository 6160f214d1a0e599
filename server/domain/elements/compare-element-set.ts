import { and, asc, eq, isNull } from 'drizzle-orm'
import { allowanceOf } from '#shared/physics/link/allowance'
import type { MeanElements } from '#shared/physics/types'
import type { ComparisonOut } from '#shared/schemas/elements'
import { elementSets, links, spacecraft, stations } from '~~/server/database/schema'
import { runTask } from '~~/server/workers/pool'
import type { Deps } from '../context'
import { manoeuvresOf } from '../manoeuvres/manoeuvres-of'
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
 * per link against its allowance, where it has the spacecraft over a day, and warnings with their reasons. Without a
 * set in use every pass is new.
 */
export async function compareElementSet({ db, now }: Pick<Deps, 'db' | 'now'>, { id }: { id: string }): Promise<ComparisonOut> {
  const set = await findSet(db, id)
  const [craft] = set.spacecraftId ? await db.select().from(spacecraft).where(eq(spacecraft.id, set.spacecraftId)) : []
  const [inUse] = craft?.inUseSetId ? await db.select().from(elementSets).where(eq(elementSets.id, craft.inUseSetId)) : []
  const stationRows = await db.select().from(stations).where(isNull(stations.retiredAt)).orderBy(asc(stations.name))
  const linkRows = craft ? await db.select().from(links).where(and(eq(links.spacecraftId, craft.id), isNull(links.retiredAt))).orderBy(asc(links.name)) : []
  const manoeuvres = craft ? await manoeuvresOf({ db }, craft.id) : []
  const settings = await readSettings(db)
  // What flies now says how far a set may be from it; the candidate must not excuse itself.
  const accuracyOf = async (craft: SpacecraftRow, elements: MeanElements) =>
    alongTrackOf(craft, elements, await learnedAccuracy({ db }, { spacecraftId: craft.id, elements: (inUse ?? set).elements, settings }), manoeuvres)

  const fromMs = now.getTime()
  const facts = linkRows.map(row => ({ id: row.id, name: row.name, allowanceHz: allowanceOf(linkModelOf(row)).allowanceHz }))
  const compared = await runTask('compare-sets', {
    candidate: { elements: set.elements, accuracy: craft ? await accuracyOf(craft, set.elements) : null },
    inUse: craft && inUse ? { elements: inUse.elements, accuracy: await accuracyOf(craft, inUse.elements) } : null,
    stations: stationRows.map(row => ({ id: row.id, site: siteOf(row) })),
    links: linkRows.map(({ id, direction, carrierHz, turnaroundNumerator }, i) => ({ id, direction, carrierHz, isCoherent: turnaroundNumerator !== null, allowanceHz: facts[i]!.allowanceHz })),
    fromMs, toMs: fromMs + SPAN_MS, horizonEndMs: fromMs + settings.horizonDays * DAY_MS,
    ut1MinusUtcS: ut1InForce(settings, now).ut1MinusUtcS,
  })

  const stationName = (id: string) => stationRows.find(row => row.id === id)!.name
  const link = (id: string) => facts.find(fact => fact.id === id)!
  const passes: ComparisonOut['passes'] = compared.passes.map(({ aosMs, links, ...pass }) => ({
    ...pass,
    stationName: stationName(pass.stationId),
    aos: isoOf(aosMs),
    links: links.map(({ id, worstShiftHz }) => ({ linkId: id, linkName: link(id).name, allowanceHz: link(id).allowanceHz, worstShiftHz })),
  }))
  const worstByLink = worstOf(passes)
  return {
    setId: id,
    inUseSetId: craft?.inUseSetId ?? null,
    warnings: [...compared.warnings],
    passes,
    worstByLink,
    largest: {
      shiftS: Math.max(0, ...passes.flatMap(pass => [pass.aosShiftS, pass.culminationShiftS, pass.losShiftS].map(shift => Math.abs(shift ?? 0)))),
      allowanceShare: Math.max(0, ...worstByLink.map(({ share }) => share)),
    },
    jumpSigmas: compared.jumpSigmas,
    difference: compared.difference.map(({ atMs, ...offset }) => ({ at: isoOf(atMs), ...offset })),
    curve: compared.curve && {
      stationName: stationName(compared.curve.stationId), aos: isoOf(compared.curve.aosMs), linkName: link(compared.curve.linkId).name, allowanceHz: link(compared.curve.linkId).allowanceHz,
      samples: compared.curve.samples.map(({ atMs, ...hz }) => ({ at: isoOf(atMs), ...hz })),
    },
  }
}

const isoOf = (ms: number) => new Date(Math.round(ms)).toISOString()

/** Of each link the pass that moves it most; the link that is moved most first. */
function worstOf(passes: ComparisonOut['passes']): ComparisonOut['worstByLink'] {
  const worst = new Map<string, ComparisonOut['worstByLink'][number]>()
  for (const { stationName, aos, links } of passes) {
    for (const link of links) {
      const share = link.worstShiftHz / link.allowanceHz
      if (share >= (worst.get(link.linkId)?.share ?? 0)) worst.set(link.linkId, { ...link, share, stationName, aos })
    }
  }
  return [...worst.values()].sort((a, b) => b.share - a.share)
}
