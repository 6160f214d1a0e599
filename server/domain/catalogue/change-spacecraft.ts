import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { SpacecraftOut, changeSpacecraftBody } from '#shared/schemas/spacecraft'
import { spacecraft } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { difference, touches } from '../difference'
import { requestRefresh } from '../prediction/request-refresh'
import { adoptElementSets } from './adopt-element-sets'
import { getSpacecraft } from './read-spacecraft'
import { refuseDuplicates } from './refuse-duplicates'
import { requireLive } from './require-row'

/** What the error budget of its tables is made with. */
const budgetFields = ['oscillatorPpm', 'alongTrackFloorKm', 'alongTrackGrowthKmPerDay'] as const

export async function changeSpacecraft(deps: Deps, id: string, input: z.output<typeof changeSpacecraftBody>): Promise<SpacecraftOut> {
  await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(spacecraft).where(eq(spacecraft.id, id)).for('update')
    const present = requireLive(row, 'spacecraft')
    const change = difference<typeof present>(present, input)
    if (!change) return
    await tx.update(spacecraft).set(change.after).where(eq(spacecraft.id, id))
    await recordAudit(inner, { action: 'spacecraft.change', entityKind: 'spacecraft', entityId: id, ...change })
    if (change.after.catalogueNumber) await adoptElementSets(inner, id, change.after.catalogueNumber)
    if (touches(change, budgetFields)) await requestRefresh(inner, { spacecraftIds: [id], reason: `${present.name}: error budget changed` })
  }))
  return getSpacecraft(deps, id)
}
