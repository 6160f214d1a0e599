import { inArray } from 'drizzle-orm'
import type { AntennaConflictOut } from '#shared/schemas/antenna-conflicts'
import { antennaDecisions } from '~~/server/database/schema'
import type { Deps } from '../context'
import { scheduleActor } from '../context'
import type { Want, WantsQuery } from './load-wants'
import { loadWants } from './load-wants'
import { inPreference, overlapMs, pairsOf } from './settle'

export type DecisionRow = typeof antennaDecisions.$inferSelect
export interface Conflict { pair: [Want, Want], overlapMs: number, decision: DecisionRow | null }

/** A pass before the window may reach into it. */
const longestPassMs = 24 * 3600_000

/** Pairs of passes that want one antenna at one time and end in the window, by the earlier busy time. With slack: also those that nearly do. */
export async function findConflicts(deps: Pick<Deps, 'db'>, query: WantsQuery, slackMs = 0): Promise<Conflict[]> {
  const wants = await loadWants(deps, { ...query, from: new Date(query.from.getTime() - longestPassMs) })
  const pairs = pairsOf(wants, slackMs).filter(pair => pair.every(want => want.losMs >= query.from.getTime())).sort(([one], [other]) => one.busyFromMs - other.busyFromMs)
  const decisions = await decisionsOf(deps, pairs.flat().map(({ passId }) => passId))
  return pairs.map(pair => ({ pair, overlapMs: overlapMs(...pair), decision: decisions.find(decision => isOf(decision, pair)) ?? null }))
}

export async function decisionsOf({ db }: Pick<Deps, 'db'>, passIds: readonly string[]): Promise<DecisionRow[]> {
  return passIds.length === 0 ? [] : db.select().from(antennaDecisions).where(inArray(antennaDecisions.passId, [...new Set(passIds)]))
}

const isOf = ({ antennaId, passId, otherPassId }: DecisionRow, pair: readonly Want[]) => pair[0]!.antennaId === antennaId && pair.every(want => want.passId === passId || want.passId === otherPassId)

/** Of the pair, the pass that has the antenna unless somebody decides otherwise. */
export const defaultOf = (pair: readonly Want[]): Want => [...pair].sort(inPreference)[0]!

const iso = (ms: number) => new Date(Math.round(ms)).toISOString()

export function conflictOut({ pair, decision }: Conflict): AntennaConflictOut {
  const { antennaId, antennaName, setupS, stationId, stationName, stationZone } = pair[0]
  const passOf = ({ passId, spacecraftId, spacecraftName, priority, aosMs, losMs, maxElevationDeg, busyFromMs, busyToMs, tables }: Want): AntennaConflictOut['passes'][0] => ({
    passId, spacecraftId, spacecraftName, priority, maxElevationDeg, aos: iso(aosMs), los: iso(losMs), busyFrom: iso(busyFromMs), busyTo: iso(busyToMs),
    tables: tables.map(({ id, linkName, direction, state, standsDown }) => ({ id, linkName, direction, state, standsDown })),
  })
  return {
    antennaId, antennaName, setupS, stationId, stationName, stationZone,
    passes: [passOf(pair[0]), passOf(pair[1])],
    defaultPassId: defaultOf(pair).passId,
    given: decision && { passId: decision.passId, by: decision.decidedBy, at: decision.decidedAt.toISOString(), reason: decision.reason, byDefault: decision.decidedBy === scheduleActor.name },
  }
}

const dayMs = 24 * 3600_000

/** For people and programs: the next two days unless a window is named. */
export async function listConflicts({ db, now }: Pick<Deps, 'db' | 'now'>, { from, to, stationId }: { from?: string, to?: string, stationId?: string }): Promise<{ items: AntennaConflictOut[] }> {
  const begin = from ? new Date(from) : now
  const conflicts = await findConflicts({ db }, { from: begin, to: to ? new Date(to) : new Date(begin.getTime() + 2 * dayMs), stationId })
  return { items: conflicts.map(conflictOut) }
}
