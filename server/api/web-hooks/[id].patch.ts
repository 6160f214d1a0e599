import { changeWebHook } from '~~/server/domain/web-hooks/change-web-hook'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/web-hooks/{id}', async ({ db, actor, now, params, body }) => changeWebHook({ db, actor, now }, { id: params.id, ...body }))
