import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { RadioOut, changeRadioBody } from '#shared/schemas/stations'
import { radioProblems } from '#shared/schemas/stations'
import { antennas, radios } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { difference } from '../difference'
import { requestRefresh } from '../prediction/request-refresh'
import { getRadio } from './read-radios'
import { refuseDuplicates } from './refuse-duplicates'
import { requireLive, requireNoProblems } from './require-row'

export async function changeRadio(deps: Deps, id: string, input: z.output<typeof changeRadioBody>): Promise<RadioOut> {
  await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(radios).where(eq(radios.id, id)).for('update')
    const present = requireLive(row, 'radio')
    const change = difference<typeof present>(present, input)
    if (!change) return
    requireNoProblems(radioProblems({ ...present, ...change.after }))
    await tx.update(radios).set(change.after).where(eq(radios.id, id))
    await recordAudit(inner, { action: 'radio.change', entityKind: 'radio', entityId: id, ...change })
    if (Object.keys(change.after).some(field => field !== 'name')) {
      const [antenna] = await tx.select({ stationId: antennas.stationId }).from(antennas).where(eq(antennas.id, present.antennaId))
      await requestRefresh(inner, { stationIds: [antenna!.stationId], reason: `radio ${present.name} changed` })
    }
  }))
  return getRadio(deps, id)
}
