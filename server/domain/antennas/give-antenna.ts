import { and, asc, eq, inArray, or } from 'drizzle-orm'
import type { z } from 'zod'
import type { AntennaConflictOut, giveAntennaBody } from '#shared/schemas/antenna-conflicts'
import { antennaDecisions, passes, tables } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import { lockTable } from '../tables/lock-table'
import type { Conflict } from './find-conflicts'
import { conflictOut, findConflicts } from './find-conflicts'
import { standDown, standUp } from './stand-down'

/** Gives an antenna to one of two passes that want it at one time: the other's tables on it stand down, and the first's that stood down for the other come back. */
export async function giveAntenna(given: Deps<PersonActor>, input: z.output<typeof giveAntennaBody>): Promise<AntennaConflictOut> {
  return given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    await lockPasses(deps, [input.passId, input.otherPassId])
    const conflict = await requireConflict(deps, input)
    if (conflict.decision?.passId === input.passId && conflict.decision.decidedBy !== 'Schedule') {
      throw new DomainError('conflict', `${conflict.decision.decidedBy} has given ${conflict.pair[0].antennaName} to ${nameOf(conflict, input.passId)} already.`)
    }
    await settleFor(deps, conflict, input.passId, input.reason ?? null)
    return conflictOut(await requireConflict(deps, input))
  })
}

const nameOf = ({ pair }: Conflict, passId: string) => pair.find(want => want.passId === passId)!.spacecraftName

/** The decision, what it does to both passes' tables, and the trail. The schedule decides by default. */
export async function settleFor(deps: Deps, conflict: Conflict, passId: string, reason: string | null): Promise<void> {
  const { db, actor, now } = deps
  const winner = conflict.pair.find(want => want.passId === passId)!
  const loser = conflict.pair.find(want => want.passId !== passId)!
  const { antennaId, antennaName } = winner
  await db.delete(antennaDecisions).where(and(eq(antennaDecisions.antennaId, antennaId), or(
    and(eq(antennaDecisions.passId, winner.passId), eq(antennaDecisions.otherPassId, loser.passId)), and(eq(antennaDecisions.passId, loser.passId), eq(antennaDecisions.otherPassId, winner.passId)),
  )))
  const [row] = await db.insert(antennaDecisions).values({ antennaId, passId: winner.passId, otherPassId: loser.passId, decidedBy: actor.name, decidedAt: now, reason }).returning()
  await recordAudit(deps, {
    action: 'antenna.give', entityKind: 'antenna', entityId: antennaId, reason,
    before: conflict.decision && { passId: conflict.decision.passId, decidedBy: conflict.decision.decidedBy }, after: { decisionId: row!.id, passId: winner.passId, otherPassId: loser.passId },
  })
  const downWords = `The antenna ${antennaName} is given to ${winner.spacecraftName}${actor.kind === 'person' ? '' : ', by priority'}: stands down${reason ? ` (${reason})` : ''}.`
  const elsewhere = await stillDownFor(deps, antennaId, winner.passId)
  for (const id of tableIds(loser)) await standDown(deps, await lockTable(deps, id), downWords)
  if (!elsewhere) for (const id of tableIds(winner)) await standUp(deps, await lockTable(deps, id), `The antenna ${antennaName} is given back.`)
}

const tableIds = ({ tables: own }: Conflict['pair'][number]) => own.map(({ id }) => id).sort()

/** Given to a third pass, it does not come back by a decision between these two. */
async function stillDownFor({ db }: Deps, antennaId: string, passId: string): Promise<boolean> {
  return (await db.select({ id: antennaDecisions.id }).from(antennaDecisions).where(and(eq(antennaDecisions.antennaId, antennaId), eq(antennaDecisions.otherPassId, passId)))).length > 0
}

async function requireConflict(deps: Deps, { antennaId, passId, otherPassId }: z.output<typeof giveAntennaBody>): Promise<Conflict> {
  const rows = await deps.db.select({ id: passes.id, aos: passes.aos, los: passes.los }).from(passes).where(inArray(passes.id, [passId, otherPassId]))
  if (rows.length < 2) throw new DomainError('not-found', 'There is no such pass.')
  if (rows.some(({ los }) => los <= deps.now)) throw new DomainError('conflict', 'One of the passes is over: there is nothing left to give.')
  const from = new Date(Math.min(...rows.map(({ aos }) => aos.getTime())))
  const to = new Date(Math.max(...rows.map(({ aos }) => aos.getTime())) + 1)
  const found = (await findConflicts(deps, { from, to, antennaId })).find(({ pair }) => pair.every(want => want.passId === passId || want.passId === otherPassId))
  if (!found) throw new DomainError('conflict', 'These passes do not want this antenna at one time: there is nothing to decide. Tables held for another reason want none.')
  return found
}

/** Decisions on these passes come one after the other; in order of id, so that no two wait for each other. */
async function lockPasses({ db }: Deps, ids: readonly string[]): Promise<void> {
  await db.select({ id: tables.id }).from(tables).where(inArray(tables.passId, [...ids])).orderBy(asc(tables.id)).for('update')
}
