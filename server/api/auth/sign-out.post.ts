import { endSession } from '~~/server/domain/auth/sign-in'
import { defineRoute } from '~~/server/http/define-route'
import { dropSession, readSessionHash } from '~~/server/http/session'

export default defineRoute('POST /api/auth/sign-out', async ({ event, db, now }) => {
  const hash = await readSessionHash(event)
  if (hash) await endSession({ db, now }, hash)
  await dropSession(event)
  return undefined
})
