import { sql } from 'drizzle-orm'
import { formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import type { LockedTable, RevisionRow } from '../tables/lock-table'
import { decisionsOf } from './find-conflicts'
import { settleFor } from './give-antenna'
import type { Want } from './load-wants'
import { loadWants } from './load-wants'
import { overlapMs, settle } from './settle'
import { standDown } from './stand-down'

/** How far around a pass others are looked at: a chain of passes that want the antenna one after the other. */
const aroundMs = 12 * 3600_000

/**
 * Whether the antenna is this pass's to publish for; null: it is. The schedule settles by priority what nobody has decided, and
 * the table stands down; a person is told to give the antenna first. What is out keeps the antenna until a person decides.
 */
export async function antennaRefusal(deps: Deps, table: LockedTable, open: RevisionRow): Promise<{ outcome: 'stands-down' | 'antenna-wanted', detail: string } | null> {
  const { pass } = table
  const { rows } = await deps.db.execute<{ antenna_id: string }>(sql`SELECT antenna_id FROM radios WHERE id = ${open.radioId}`)
  const antennaId = rows[0]!.antenna_id
  const wants = await loadWants(deps, { from: new Date(pass.aos.getTime() - aroundMs), to: new Date(pass.aos.getTime() + aroundMs), antennaId })
  const own = wants.find(want => want.passId === pass.id)
  const rivals = own ? wants.filter(want => want !== own && overlapMs(own, want) > 0) : []
  if (!own || rivals.length === 0) return null
  const decisions = (await decisionsOf(deps, wants.map(({ passId }) => passId))).filter(decision => decision.antennaId === antennaId)
  const down = settle(wants, decisions).get(pass.id)
  if (down) {
    const detail = `Stands down for ${down.for.spacecraftName}, which has ${own.antennaName}.`
    if (deps.actor.kind === 'person') return { outcome: 'antenna-wanted', detail: `${down.for.spacecraftName} has ${own.antennaName} from ${formatUtc(down.for.busyFromMs, 'second')}${down.byDefault ? ' by its priority' : ''}: give the antenna to this pass first.` }
    if (down.byDefault) await settleFor(deps, { pair: [down.for, own], overlapMs: overlapMs(own, down.for), decision: null }, down.for.passId, null)
    else await standDown(deps, table, detail)
    return { outcome: 'stands-down', detail }
  }
  const isDecided = (rival: Want) => decisions.some(({ passId, otherPassId }) => passId === pass.id && otherPassId === rival.passId)
  const first = rivals.find(rival => !isDecided(rival) && rival.tables.some(({ isOut }) => isOut))
  return first ? { outcome: 'antenna-wanted', detail: `${first.spacecraftName} has ${own.antennaName} at that time with tables that are out: give the antenna to one of them.` } : null
}
