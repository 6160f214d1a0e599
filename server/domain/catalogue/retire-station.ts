import { and, eq, inArray, isNull } from 'drizzle-orm'
import { antennas, radios, stations } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { requireFound } from './require-row'

/** Retires a station with its antennas and radios and has its coming passes taken back; its keys stop working. Retiring twice changes nothing. */
export async function retireStation(deps: Deps, id: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(stations).where(eq(stations.id, id)).for('update')
    const present = requireFound(row, 'station')
    if (present.retiredAt) return
    const retiredAt = deps.now
    await tx.update(stations).set({ retiredAt }).where(eq(stations.id, id))
    const retiredAntennas = (await tx.update(antennas).set({ retiredAt }).where(and(eq(antennas.stationId, id), isNull(antennas.retiredAt))).returning({ id: antennas.id })).map(antenna => antenna.id)
    const retiredRadios = retiredAntennas.length === 0 ? [] : await tx.update(radios).set({ retiredAt }).where(and(inArray(radios.antennaId, retiredAntennas), isNull(radios.retiredAt))).returning({ id: radios.id })
    const pairs = await requestRefresh(inner, { stationIds: [id], reason: `station ${present.name} retired`, includeRetired: true })
    await recordAudit(inner, {
      action: 'station.retire', entityKind: 'station', entityId: id, before: { retiredAt: null },
      after: { retiredAt: retiredAt.toISOString(), retiredAntennaIds: retiredAntennas, retiredRadioIds: retiredRadios.map(radio => radio.id), spacecraftRecomputed: pairs },
    })
  })
}
