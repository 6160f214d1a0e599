import { and, eq, inArray, lt, or, sql } from 'drizzle-orm'
import { elementUploadParts, elementUploads } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readOrLeave } from './upload-elements'

/** No request takes longer to send its body: the server itself cuts it off after five minutes. */
const longestSendingMs = 10 * 60_000
/** One that has just come is in the hands of whoever received it. */
const graceMs = 15_000

/**
 * Takes up what a stopped server left: at boot at once, later what nobody has had in hand for a while. An upload's original
 * is stored before it is answered, so nothing has to be sent again; one that was never sent whole is marked failed.
 */
export async function resumeUploads(deps: Deps, { atBoot = true }: { atBoot?: boolean } = {}): Promise<{ resumed: number, broken: number }> {
  const { db, now } = deps
  await giveUpUnsent(deps)
  const settled = lt(elementUploads.createdAt, new Date(now.getTime() - graceMs))
  const left = await db.select({ id: elementUploads.id }).from(elementUploads)
    .where(and(eq(elementUploads.state, 'reading'), atBoot ? undefined : or(settled, sql`${elementUploads.cancelRequestedAt} IS NOT NULL`))).orderBy(elementUploads.createdAt)
  let [resumed, broken] = [0, 0]
  for (const { id } of left) {
    await readOrLeave(deps, id).then((outcome) => { if (outcome.kind !== 'elsewhere') resumed++ }, () => { broken++ })
  }
  return { resumed, broken }
}

async function giveUpUnsent({ db, now }: Deps): Promise<void> {
  const unsent = await db.update(elementUploads).set({ state: 'failed', finishedAt: now, detail: 'The sending was broken off; nothing of it was kept. Upload it again.' })
    .where(and(eq(elementUploads.state, 'receiving'), lt(elementUploads.createdAt, new Date(now.getTime() - longestSendingMs)))).returning({ id: elementUploads.id })
  if (unsent.length > 0) await db.delete(elementUploadParts).where(inArray(elementUploadParts.uploadId, unsent.map(({ id }) => id)))
}
