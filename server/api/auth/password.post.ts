import { changePassword } from '~~/server/domain/auth/change-password'
import { defineRoute } from '~~/server/http/define-route'
import { throttlePasswordChange } from '~~/server/http/throttle'

export default defineRoute('POST /api/auth/password', async ({ event, db, actor, now, body }) => {
  await throttlePasswordChange(event, actor.email, () => changePassword({ db, actor, now }, body))
  return undefined
})
