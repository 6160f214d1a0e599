import { and, eq, isNull } from 'drizzle-orm'
import { antennas, radios } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { requireFound } from './require-row'

/** Retires an antenna with its radios and has the station's tables computed anew. Retiring twice changes nothing. */
export async function retireAntenna(deps: Deps, id: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(antennas).where(eq(antennas.id, id)).for('update')
    const present = requireFound(row, 'antenna')
    if (present.retiredAt) return
    await tx.update(antennas).set({ retiredAt: deps.now }).where(eq(antennas.id, id))
    const retired = await tx.update(radios).set({ retiredAt: deps.now }).where(and(eq(radios.antennaId, id), isNull(radios.retiredAt))).returning({ id: radios.id })
    const pairs = await requestRefresh(inner, { stationIds: [present.stationId], reason: `antenna ${present.name} retired` })
    await recordAudit(inner, { action: 'antenna.retire', entityKind: 'antenna', entityId: id, before: { retiredAt: null }, after: { retiredAt: deps.now.toISOString(), retiredRadioIds: retired.map(radio => radio.id), spacecraftRecomputed: pairs } })
  })
}
