import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { AntennaOut, createAntennaBody } from '#shared/schemas/stations'
import { antennas, stations } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { getAntenna } from './read-stations'
import { refuseDuplicates } from './refuse-duplicates'
import { requireReferred } from './require-row'

export async function createAntenna(deps: Deps, input: z.output<typeof createAntennaBody>): Promise<AntennaOut> {
  const id = await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const [station] = await tx.select().from(stations).where(eq(stations.id, input.stationId)).for('share')
    requireReferred(station, 'stationId', 'station')
    const [row] = await tx.insert(antennas).values({ ...input, createdAt: deps.now }).returning({ id: antennas.id })
    await recordAudit({ ...deps, db: tx }, { action: 'antenna.create', entityKind: 'antenna', entityId: row!.id, after: input })
    return row!.id
  }))
  return getAntenna(deps, id)
}
