import { eq } from 'drizzle-orm'
import { antennas, radios } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { requireFound } from './require-row'

/** Retires a radio and has the station's tables computed anew with the radios that remain. Retiring twice changes nothing. */
export async function retireRadio(deps: Deps, id: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select({ radio: radios, stationId: antennas.stationId }).from(radios).innerJoin(antennas, eq(antennas.id, radios.antennaId)).where(eq(radios.id, id)).for('update', { of: radios })
    const { radio, stationId } = requireFound(row, 'radio')
    if (radio.retiredAt) return
    await tx.update(radios).set({ retiredAt: deps.now }).where(eq(radios.id, id))
    const pairs = await requestRefresh(inner, { stationIds: [stationId], reason: `radio ${radio.name} retired` })
    await recordAudit(inner, { action: 'radio.retire', entityKind: 'radio', entityId: id, before: { retiredAt: null }, after: { retiredAt: deps.now.toISOString(), spacecraftRecomputed: pairs } })
  })
}
