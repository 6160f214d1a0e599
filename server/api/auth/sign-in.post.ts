import { endSession, signIn } from '~~/server/domain/auth/sign-in'
import { defineRoute } from '~~/server/http/define-route'
import { readSessionHash, writeSession } from '~~/server/http/session'
import { throttleSignIn } from '~~/server/http/throttle'

export default defineRoute('POST /api/auth/sign-in', async ({ event, db, now, body }) => {
  const { user, sid } = await throttleSignIn(event, body.email, () => signIn({ db, now }, body))
  const before = await readSessionHash(event)
  if (before) await endSession({ db, now }, before)
  await writeSession(event, sid)
  return { user }
})
