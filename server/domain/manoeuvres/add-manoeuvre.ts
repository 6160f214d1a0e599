import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { addManoeuvreBody, ManoeuvreOut } from '#shared/schemas/manoeuvres'
import { manoeuvres, spacecraft } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { requireLive } from '../catalogue/require-row'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { getManoeuvre } from './read-manoeuvres'

/** Enters a manoeuvre: its window teaches nothing about ageing, and until a set from after it is in use the budgets are wider. */
export async function addManoeuvre(deps: Deps, spacecraftId: string, input: z.output<typeof addManoeuvreBody>): Promise<ManoeuvreOut> {
  const id = await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(spacecraft).where(eq(spacecraft.id, spacecraftId)).for('update')
    const craft = requireLive(row, 'spacecraft')
    const { startsAt, endsAt, speedSigmaMps, note } = input
    const [added] = await tx.insert(manoeuvres).values({ spacecraftId, startsAt: new Date(startsAt), endsAt: new Date(endsAt), speedSigmaMps, note, enteredBy: deps.actor.name, createdAt: deps.now }).returning({ id: manoeuvres.id })
    await recordAudit(inner, { action: 'manoeuvre.add', entityKind: 'manoeuvre', entityId: added!.id, after: { spacecraftId, startsAt, endsAt, speedSigmaMps, note } })
    await requestRefresh(inner, { spacecraftIds: [spacecraftId], reason: `${craft.name}: a manoeuvre at ${startsAt.slice(0, 16)}Z was entered` })
    return added!.id
  })
  return getManoeuvre(deps, id)
}
