import { listRadios } from '~~/server/domain/catalogue/read-radios'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/radios', async ({ db, query }) => listRadios({ db }, query))
