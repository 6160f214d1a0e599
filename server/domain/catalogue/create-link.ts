import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { LinkOut, createLinkBody } from '#shared/schemas/links'
import { links, spacecraft } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { requestRefresh } from '../prediction/request-refresh'
import { getLink } from './read-links'
import { refuseDuplicates } from './refuse-duplicates'
import { requireReferred } from './require-row'

/** Creates a link and has its tables drafted. Unless said otherwise a downlink's tables that hold approve themselves; an uplink's wait for a person. */
export async function createLink(deps: Deps, input: z.output<typeof createLinkBody>): Promise<LinkOut> {
  const id = await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [owner] = await tx.select().from(spacecraft).where(eq(spacecraft.id, input.spacecraftId)).for('share')
    const { name } = requireReferred(owner, 'spacecraftId', 'spacecraft')
    const values = { ...input, approveWhatHolds: input.approveWhatHolds ?? input.direction === 'downlink' }
    const [row] = await tx.insert(links).values({ ...values, createdAt: deps.now }).returning({ id: links.id })
    await recordAudit(inner, { action: 'link.create', entityKind: 'link', entityId: row!.id, after: values })
    await requestRefresh(inner, { spacecraftIds: [input.spacecraftId], reason: `${name}: new link ${input.name}` })
    return row!.id
  }))
  return getLink(deps, id)
}
