import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { StationOut, changeStationBody } from '#shared/schemas/stations'
import { stations } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { difference, touches } from '../difference'
import { requestRefresh } from '../prediction/request-refresh'
import { getStation } from './read-stations'
import { refuseDuplicates } from './refuse-duplicates'
import { requireLive } from './require-row'

/** What its passes and tables are computed with. */
const predictionFields = ['latitudeDeg', 'longitudeDeg', 'heightM', 'minElevationDeg', 'mask', 'clockErrorMs'] as const

export async function changeStation(deps: Deps, id: string, input: z.output<typeof changeStationBody>): Promise<StationOut> {
  await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(stations).where(eq(stations.id, id)).for('update')
    const present = requireLive(row, 'station')
    const change = difference<typeof present>(present, input)
    if (!change) return
    await tx.update(stations).set(change.after).where(eq(stations.id, id))
    await recordAudit(inner, { action: 'station.change', entityKind: 'station', entityId: id, ...change })
    if (touches(change, predictionFields)) await requestRefresh(inner, { stationIds: [id], reason: `station ${present.name} changed` })
  }))
  return getStation(deps, id)
}
