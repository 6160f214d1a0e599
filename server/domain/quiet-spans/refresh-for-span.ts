import { eq } from 'drizzle-orm'
import { links } from '~~/server/database/schema'
import type { quietSpans } from '~~/server/database/schema'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'

/** Asks for the predictions that a span concerns, and no others. */
export async function refreshForSpan(deps: Deps, { stationId, spacecraftId, linkId }: Pick<typeof quietSpans.$inferSelect, 'stationId' | 'spacecraftId' | 'linkId'>, reason: string): Promise<void> {
  const [link] = linkId ? await deps.db.select({ spacecraftId: links.spacecraftId }).from(links).where(eq(links.id, linkId)) : []
  const craftId = spacecraftId ?? link?.spacecraftId
  await requestRefresh(deps, { reason, ...(craftId ? { spacecraftIds: [craftId] } : {}), ...(stationId ? { stationIds: [stationId] } : {}) })
}
