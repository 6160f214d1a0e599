import { createHash } from 'node:crypto'
import type { UploadOut } from '#shared/schemas/elements'
import { elementUploads } from '~~/server/database/schema'
import type { Deps } from '../context'
import { personId } from '../context'
import { DomainError } from '../errors'
import { getUpload } from './show-uploads'
import { markBroken, readAtOnceBytes, readUpload } from './read-upload'
import { displayFileName } from './storable-text'

export interface UploadInput {
  /** What was sent, byte for byte. */
  bytes: Buffer
  source: 'file' | 'paste' | 'api' | 'demo'
  fileName?: string | null
  /** Where the sender finds the problems of a file that is refused whole: the field's name. */
  path?: string
}

const errorsShown = 100

/**
 * Receives element sets. Up to 1 MB: the finished report; a file refused whole throws `not-valid` with its lines, and
 * the upload stays on record as failed. Above: the report in state `reading`, and reading goes on behind it
 * (`onBackground` is handed its end, to wait for or to log).
 */
export async function uploadElements(deps: Deps, input: UploadInput, onBackground: (work: Promise<void>) => void = work => void work.catch(() => {})): Promise<UploadOut> {
  const { db, actor, now } = deps
  const [row] = await db.insert(elementUploads).values({
    state: 'reading',
    by: actor.name,
    personId: personId(actor),
    fileName: displayFileName(input.fileName),
    source: input.source,
    original: input.bytes,
    sha256: createHash('sha256').update(input.bytes).digest('hex'),
    totalBytes: input.bytes.length,
    createdAt: now,
  }).returning({ id: elementUploads.id })
  const { id } = row!
  if (input.bytes.length > readAtOnceBytes) {
    onBackground(readInBackground(deps, id, input.bytes))
    return getUpload(deps, id)
  }
  const outcome = await readUpload(deps, id, input.bytes).catch(async (error: unknown) => {
    await markBroken(db, id).catch(() => {})
    throw error
  })
  if (outcome.kind === 'refused') {
    const more = outcome.errors.length > errorsShown ? ` The first ${errorsShown} are listed.` : ''
    throw new DomainError('not-valid', outcome.detail + more, outcome.errors.slice(0, errorsShown).map(({ message, line }) => ({ path: input.path ?? 'file', message, line })))
  }
  return getUpload(deps, id)
}

async function readInBackground(deps: Deps, id: string, bytes: Buffer): Promise<void> {
  try {
    await readUpload(deps, id, bytes)
  }
  catch (error) {
    // Where even this fails the upload stays in `reading` and is resumed at the next boot.
    await markBroken(deps.db, id).catch(() => {})
    throw error
  }
}
