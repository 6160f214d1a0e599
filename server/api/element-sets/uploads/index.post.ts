import { getRequestHeader, setResponseStatus } from 'h3'
import { forgetUpload, receiveUpload } from '~~/server/domain/elements/receive-upload'
import { takeUpUpload } from '~~/server/domain/elements/upload-elements'
import { defineRoute } from '~~/server/http/define-route'
import { answerOnce } from '~~/server/http/idempotency'
import { describeError } from '~~/server/http/describe-error'
import { log } from '~~/server/http/log'
import { openUpload } from '~~/server/http/open-upload'

const route = 'POST /api/element-sets/uploads'

export default defineRoute(route, async ({ event, db, now, actor }) => {
  const { pieces, fileName, path, isFile } = await openUpload(event)
  const origin = { source: actor.kind === 'key' ? 'api' as const : isFile ? 'file' as const : 'paste' as const, fileName }
  const received = await receiveUpload({ db, now, actor }, origin, pieces)
  const status = received.kind === 'stored' ? 202 : 201
  let taken = false
  const takeUp = () => {
    taken = true
    return takeUpUpload({ db, now, actor }, { ...origin, path }, received, (work) => {
      work.catch((error: unknown) => log.error({ error: describeError(error) }, 'an upload could not be stored'))
    })
  }
  setResponseStatus(event, status)
  if (getRequestHeader(event, 'idempotency-key') === undefined) return takeUp()
  try {
    return await answerOnce(event, { db, now, actor, route, body: { sha256: received.sha256 }, status }, takeUp)
  }
  finally {
    // The first answer was given again: what came this time is not to be read beside it.
    if (!taken && received.kind === 'stored') await forgetUpload({ db }, received.id)
  }
})
