import { changeMe } from '~~/server/domain/people/change-me'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/auth/me', async ({ db, actor, now, body }) => changeMe({ db, actor, now }, body))
