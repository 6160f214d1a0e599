import { getLink } from '~~/server/domain/catalogue/read-links'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/links/{id}', async ({ db, params }) => getLink({ db }, params.id))
