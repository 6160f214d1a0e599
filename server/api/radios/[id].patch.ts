import { changeRadio } from '~~/server/domain/catalogue/change-radio'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/radios/{id}', async ({ db, actor, now, params, body }) => changeRadio({ db, actor, now }, params.id, body))
