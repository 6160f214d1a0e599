import { changeAntenna } from '~~/server/domain/catalogue/change-antenna'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/antennas/{id}', async ({ db, actor, now, params, body }) => changeAntenna({ db, actor, now }, params.id, body))
