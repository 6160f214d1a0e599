import { and, eq, inArray, isNull } from 'drizzle-orm'
import type { UploadOut } from '#shared/schemas/elements'
import { elementUploads } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { claimOf, markCancelled } from './read-upload'
import { getUpload } from './show-uploads'
import { takeLock } from './storing-turn'
import { inHand } from './upload-columns'

/**
 * Gives an upload up that is being sent, read or stored: nothing of it is kept. Whoever stores it is told within a second
 * and takes back what it has stored so far; one that nobody has in hand ends at once.
 */
export async function cancelUpload(deps: Deps, { id }: { id: string }): Promise<UploadOut> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [asked] = await tx.update(elementUploads).set({ cancelRequestedAt: deps.now })
      .where(and(eq(elementUploads.id, id), inArray(elementUploads.state, inHand), isNull(elementUploads.cancelRequestedAt))).returning({ state: elementUploads.state })
    if (!asked) {
      const { state } = await getUpload(inner, id)
      if ((inHand as readonly string[]).includes(state)) return
      throw new DomainError('conflict', state === 'finished' ? 'This upload is finished already; its sets wait and can be refused or dropped.' : 'This upload has ended already; nothing of it was kept.')
    }
    await recordAudit(inner, { action: 'element-sets.cancel-upload', entityKind: 'element-upload', entityId: id, before: { state: asked.state }, after: { cancelRequestedAt: deps.now.toISOString() } })
    if (asked.state === 'receiving' || await takeLock(tx, claimOf(id))) await markCancelled(inner, id)
  })
  return getUpload(deps, id)
}
