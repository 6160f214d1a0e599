import { and, eq, isNull, sql } from 'drizzle-orm'
import { elementSets } from '~~/server/database/schema'
import { recordAudits } from '../audit'
import type { Deps } from '../context'

/** Sets that no spacecraft claims and that bear this catalogue number now belong to it; they keep their state. Gives how many. */
export async function adoptElementSets(deps: Deps, spacecraftId: string, catalogueNumber: string): Promise<number> {
  const adopted = await deps.db.update(elementSets).set({ spacecraftId })
    // 00005 and 5 are one number.
    .where(and(isNull(elementSets.spacecraftId), sql`ltrim(${elementSets.catalogueNumber}, '0') = ltrim(${catalogueNumber}, '0')`))
    .returning({ id: elementSets.id })
  await recordAudits(deps, adopted.map(set => ({ action: 'element-set.assign', entityKind: 'element-set', entityId: set.id, before: { spacecraftId: null }, after: { spacecraftId } })))
  return adopted.length
}

/** One named set now belongs to the spacecraft. */
export async function adoptElementSet(deps: Deps, spacecraftId: string, setId: string): Promise<void> {
  await deps.db.update(elementSets).set({ spacecraftId }).where(eq(elementSets.id, setId))
  await recordAudits(deps, [{ action: 'element-set.assign', entityKind: 'element-set', entityId: setId, before: { spacecraftId: null }, after: { spacecraftId } }])
}
