import { createHash } from 'node:crypto'
import { getRequestHeader, setResponseStatus } from 'h3'
import { readAtOnceBytes } from '~~/server/domain/elements/read-upload'
import { uploadElements } from '~~/server/domain/elements/upload-elements'
import { defineRoute } from '~~/server/http/define-route'
import { answerOnce } from '~~/server/http/idempotency'
import { describeError } from '~~/server/http/describe-error'
import { log } from '~~/server/http/log'
import { readUploadBody } from '~~/server/http/read-upload-body'

const route = 'POST /api/element-sets/uploads'

export default defineRoute(route, async ({ event, db, now, actor }) => {
  const { bytes, fileName, path, isFile } = await readUploadBody(event)
  const source = actor.kind === 'key' ? 'api' : isFile ? 'file' : 'paste'
  const status = bytes.length > readAtOnceBytes ? 202 : 201
  const upload = () => uploadElements({ db, now, actor }, { bytes, source, fileName, path }, (work) => {
    work.catch((error: unknown) => log.error({ error: describeError(error) }, 'an upload could not be stored'))
  })
  setResponseStatus(event, status)
  if (getRequestHeader(event, 'idempotency-key') === undefined) return upload()
  const body = { sha256: createHash('sha256').update(bytes).digest('hex') }
  return answerOnce(event, { db, now, actor, route, body, status }, upload)
})
