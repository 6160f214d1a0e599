import { setTimeout as wait } from 'node:timers/promises'
import type { UploadBrief } from '#shared/schemas/elements'
import type { Deps } from '../context'
import { briefOut, findUpload } from './show-uploads'
import { isInHand } from './upload-columns'

const lookEveryMs = 500

/**
 * Hands out an upload's state and counts whenever they have changed, until it has ended or nobody listens. It looks at the
 * row, so that it does not matter which server has the upload in hand.
 * @throws not-found before the first
 */
export async function* followUpload({ db }: Pick<Deps, 'db'>, id: string, signal: AbortSignal): AsyncGenerator<UploadBrief> {
  let told = ''
  while (!signal.aborted) {
    const row = await findUpload(db, id)
    const brief = briefOut(row)
    const text = JSON.stringify(brief)
    if (text !== told) yield brief
    told = text
    if (!isInHand(row)) return
    await wait(lookEveryMs, undefined, { signal }).catch(() => {})
  }
}
