import { changeSpacecraft } from '~~/server/domain/catalogue/change-spacecraft'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/spacecraft/{id}', async ({ db, actor, now, params, body }) => changeSpacecraft({ db, actor, now }, params.id, body))
