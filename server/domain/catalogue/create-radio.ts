import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { RadioOut, createRadioBody } from '#shared/schemas/stations'
import { antennas, radios } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { getRadio } from './read-radios'
import { refuseDuplicates } from './refuse-duplicates'
import { requireReferred } from './require-row'

/** Creates a radio and has the station's tables drafted for what it can serve. */
export async function createRadio(deps: Deps, input: z.output<typeof createRadioBody>): Promise<RadioOut> {
  const id = await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [antenna] = await tx.select().from(antennas).where(eq(antennas.id, input.antennaId)).for('share')
    const { stationId } = requireReferred(antenna, 'antennaId', 'antenna')
    const [row] = await tx.insert(radios).values({ ...input, createdAt: deps.now }).returning({ id: radios.id })
    await recordAudit(inner, { action: 'radio.create', entityKind: 'radio', entityId: row!.id, after: input })
    await requestRefresh(inner, { stationIds: [stationId], reason: `new radio ${input.name}` })
    return row!.id
  }))
  return getRadio(deps, id)
}
