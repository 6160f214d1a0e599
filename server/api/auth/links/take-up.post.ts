import { endSession } from '~~/server/domain/auth/sign-in'
import { takeUpLink } from '~~/server/domain/auth/take-up-link'
import { defineRoute } from '~~/server/http/define-route'
import { readSessionHash, writeSession } from '~~/server/http/session'
import { throttleOneTimeLink } from '~~/server/http/throttle'

export default defineRoute('POST /api/auth/links/take-up', async ({ event, db, now, body }) => {
  const { user, sid } = await throttleOneTimeLink(event, () => takeUpLink({ db, now }, body))
  const before = await readSessionHash(event)
  if (before) await endSession({ db, now }, before)
  await writeSession(event, sid)
  return { user }
})
