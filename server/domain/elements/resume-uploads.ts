import { inArray } from 'drizzle-orm'
import { elementUploads } from '~~/server/database/schema'
import type { Deps } from '../context'
import { markBroken, readUpload } from './read-upload'

/**
 * Called at boot: uploads that a stopped process left half done are read now. An upload's original is stored with
 * its row, so nothing has to be sent again; one that cannot be stored either way is marked failed.
 */
export async function resumeUploads(deps: Deps): Promise<{ resumed: number, broken: number }> {
  const left = await deps.db.select({ id: elementUploads.id }).from(elementUploads)
    .where(inArray(elementUploads.state, ['receiving', 'reading'])).orderBy(elementUploads.createdAt)
  let broken = 0
  for (const { id } of left) {
    try {
      await readUpload(deps, id)
    }
    catch {
      broken++
      await markBroken(deps.db, id)
    }
  }
  return { resumed: left.length - broken, broken }
}
