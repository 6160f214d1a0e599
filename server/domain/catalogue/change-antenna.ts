import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { AntennaOut, changeAntennaBody } from '#shared/schemas/stations'
import { antennas } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { difference } from '../difference'
import { getAntenna } from './read-stations'
import { refuseDuplicates } from './refuse-duplicates'
import { requireLive } from './require-row'

/** Name and set-up time: neither moves a pass or a table. */
export async function changeAntenna(deps: Deps, id: string, input: z.output<typeof changeAntennaBody>): Promise<AntennaOut> {
  await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const [row] = await tx.select().from(antennas).where(eq(antennas.id, id)).for('update')
    const present = requireLive(row, 'antenna')
    const change = difference<typeof present>(present, input)
    if (!change) return
    await tx.update(antennas).set(change.after).where(eq(antennas.id, id))
    await recordAudit({ ...deps, db: tx }, { action: 'antenna.change', entityKind: 'antenna', entityId: id, ...change })
  }))
  return getAntenna(deps, id)
}
