import { getStation } from '~~/server/domain/catalogue/read-stations'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/stations/{id}', async ({ db, params }) => getStation({ db }, params.id))
