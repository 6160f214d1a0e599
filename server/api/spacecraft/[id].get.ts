import { getSpacecraft } from '~~/server/domain/catalogue/read-spacecraft'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/spacecraft/{id}', async ({ db, now, params }) => getSpacecraft({ db, now }, params.id))
