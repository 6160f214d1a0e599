import { getRadio } from '~~/server/domain/catalogue/read-radios'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/radios/{id}', async ({ db, params }) => getRadio({ db }, params.id))
