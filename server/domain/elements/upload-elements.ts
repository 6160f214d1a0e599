import type { UploadOut } from '#shared/schemas/elements'
import type { Deps } from '../context'
import { DomainError, isUnavailable } from '../errors'
import { lifecycle } from '../schedule/lifecycle'
import { getUpload } from './show-uploads'
import type { UploadOutcome } from './read-upload'
import { errorsShown, markBroken, readUpload } from './read-upload'
import type { Received, UploadOrigin } from './receive-upload'
import { receiveUpload, storeHeld } from './receive-upload'

export interface TakeUp extends UploadOrigin {
  /** Where the sender finds the problems of a file that is refused whole: the field's name. */
  path?: string
}
export interface UploadInput extends TakeUp {
  /** What was sent, byte for byte. */
  bytes: Buffer
}

/** Handed the end of a reading that goes on behind the answer, to wait for or to log. */
export type OnBackground = (work: Promise<unknown>) => void
const unattended: OnBackground = work => void work.catch(() => {})

/** Receives element sets that are all there, and takes them up. */
export async function uploadElements(deps: Deps, { bytes, path, ...origin }: UploadInput, onBackground?: OnBackground): Promise<UploadOut> {
  return takeUpUpload(deps, { ...origin, path }, await receiveUpload(deps, origin, [bytes]), onBackground)
}

/**
 * Takes up an upload that has been received. Up to 1 MB: the finished report; a file refused whole throws `not-valid`
 * with its lines, and the upload stays on record as failed. Above: the report in state `reading`, and reading goes on.
 */
export async function takeUpUpload(deps: Deps, { path = 'file', ...origin }: TakeUp, received: Received, onBackground = unattended): Promise<UploadOut> {
  if (received.kind === 'stored') {
    onBackground(readOrLeave(deps, received.id))
    return getUpload(deps, received.id)
  }
  const id = await storeHeld(deps, origin, received)
  const outcome = await readOrLeave(deps, id)
  if (outcome.kind === 'refused') {
    const more = outcome.count > errorsShown ? ` The first ${errorsShown} are listed.` : ''
    throw new DomainError('not-valid', outcome.detail + more, outcome.errors.map(({ message, line }) => ({ path, message, line })))
  }
  return getUpload(deps, id)
}

/**
 * Reads an upload. One that the database was out of reach for, or that the server's own end cut off, is left as it is and
 * taken up again later, here or elsewhere; one that cannot be stored is marked failed.
 */
export async function readOrLeave(deps: Deps, id: string): Promise<UploadOutcome> {
  try {
    return await readUpload(deps, id)
  }
  catch (error) {
    const comesBack = lifecycle.stopping || isUnavailable(error) || (error instanceof DomainError && error.code === 'unavailable')
    // Where even this fails the upload stays in `reading` and is taken up again.
    if (!comesBack) await markBroken(deps, id).catch(() => {})
    throw error
  }
}
