import { changeStation } from '~~/server/domain/catalogue/change-station'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/stations/{id}', async ({ db, actor, now, params, body }) => changeStation({ db, actor, now }, params.id, body))
