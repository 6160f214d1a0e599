import { getTableColumns } from 'drizzle-orm'
import { elementUploads } from '~~/server/database/schema'

/** Up to this size an upload is read while its sender waits. */
export const readAtOnceBytes = 1024 * 1024

export const uploadColumns = getTableColumns(elementUploads)
export type UploadRow = typeof elementUploads.$inferSelect

/** States in which an upload is in hand: being sent, or being read and stored. */
export const inHand = ['receiving', 'reading'] as const
export const isInHand = ({ state }: Pick<UploadRow, 'state'>): boolean => (inHand as readonly string[]).includes(state)
