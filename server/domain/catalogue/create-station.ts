import type { z } from 'zod'
import type { StationOut, createStationBody } from '#shared/schemas/stations'
import { stations } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { getStation } from './read-stations'
import { refuseDuplicates } from './refuse-duplicates'

/** Creates a station and has its passes predicted; tables follow with its antennas and radios. */
export async function createStation(deps: Deps, input: z.output<typeof createStationBody>): Promise<StationOut> {
  const id = await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.insert(stations).values({ ...input, createdAt: deps.now }).returning({ id: stations.id })
    await recordAudit(inner, { action: 'station.create', entityKind: 'station', entityId: row!.id, after: input })
    await requestRefresh(inner, { stationIds: [row!.id], reason: `new station ${input.name}` })
    return row!.id
  }))
  return getStation(deps, id)
}
