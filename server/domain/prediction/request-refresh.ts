import { and, inArray, isNotNull, isNull, sql } from 'drizzle-orm'
import { spacecraft, stations } from '~~/server/database/schema'
import { enqueueOnce } from '~~/server/jobs/queue'
import type { Deps } from '../context'

export interface RefreshRequest {
  /** Left out: every spacecraft. */
  spacecraftIds?: readonly string[]
  /** Left out: every station. */
  stationIds?: readonly string[]
  /** Goes to the tables that change, in words. */
  reason: string
  /** The pairs of what has just been retired too, so that the job can take back what was predicted for them. */
  includeRetired?: boolean
}

/**
 * Asks for passes and tables to be computed anew: one job for each pair of a spacecraft that has a set in use and
 * a station. A pair that waits already is not asked for twice. What somebody has changed at one spacecraft or station
 * goes before what rolls on for all. Call it inside the transaction that makes the change.
 * Gives the number of pairs.
 */
export async function requestRefresh({ db }: Pick<Deps, 'db'>, request: RefreshRequest): Promise<number> {
  const { spacecraftIds, stationIds, reason, includeRetired = false } = request
  if (spacecraftIds?.length === 0 || stationIds?.length === 0) return 0
  const priority = priorityOf(request)
  const pairs = await db.select({ spacecraftId: spacecraft.id, stationId: stations.id }).from(spacecraft)
    .innerJoin(stations, and(sql`true`, includeRetired ? undefined : isNull(stations.retiredAt), stationIds && inArray(stations.id, [...stationIds])))
    .where(and(
      isNotNull(spacecraft.inUseSetId),
      includeRetired ? undefined : isNull(spacecraft.retiredAt),
      spacecraftIds && inArray(spacecraft.id, [...spacecraftIds]),
    ))
    .orderBy(spacecraft.id, stations.id)
  await enqueueOnce(db, 'predict', pairs.map(pair => ({ key: `${pair.spacecraftId}:${pair.stationId}`, data: { ...pair, reason } })), { priority })
  return pairs.length
}

const priorityOf = ({ spacecraftIds, stationIds }: RefreshRequest): number => (spacecraftIds ? 20 : 0) + (stationIds ? 10 : 0)
