import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { LinkOut, changeLinkBody } from '#shared/schemas/links'
import { loosenedLimits } from '#shared/loosened-limits'
import { linkProblems } from '#shared/schemas/links'
import { links } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { difference } from '../difference'
import { DomainError } from '../errors'
import { requestRefresh } from '../prediction/request-refresh'
import { getLink } from './read-links'
import { refuseDuplicates } from './refuse-duplicates'
import { requireLive, requireNoProblems } from './require-row'

/** Fields that no table depends on. */
const idleFields = new Set(['name', 'modulation'])

/** Changes a link; whatever loosens a limit needs a reason, which the trail keeps. */
export async function changeLink(deps: Deps, id: string, { reason, ...input }: z.output<typeof changeLinkBody>): Promise<LinkOut> {
  await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select().from(links).where(eq(links.id, id)).for('update')
    const present = requireLive(row, 'link')
    const change = difference<typeof present>(present, input)
    if (!change) return
    const merged = { ...present, ...change.after }
    requireNoProblems(linkProblems(merged))
    const loosened = loosenedLimits(present, merged)
    if (loosened.length > 0 && reason === undefined) {
      const message = `Say why: this loosens ${loosened.join('; ')}.`
      throw new DomainError('not-valid', `reason: ${message}`, [{ path: 'reason', message }])
    }
    await tx.update(links).set(change.after).where(eq(links.id, id))
    await recordAudit(inner, { action: loosened.length > 0 ? 'link.loosen' : 'link.change', entityKind: 'link', entityId: id, reason, ...change })
    if (Object.keys(change.after).some(field => !idleFields.has(field))) {
      await requestRefresh(inner, { spacecraftIds: [present.spacecraftId], reason: `link ${merged.name} changed${reason === undefined ? '' : `: ${reason}`}` })
    }
  }))
  return getLink(deps, id)
}
