import { changeLink } from '~~/server/domain/catalogue/change-link'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/links/{id}', async ({ db, actor, now, params, body }) => changeLink({ db, actor, now }, params.id, body))
