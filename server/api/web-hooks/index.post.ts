import { createWebHook } from '~~/server/domain/web-hooks/create-web-hook'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/web-hooks', async ({ db, actor, now, body }) => createWebHook({ db, actor, now }, body))
