import { listLinks } from '~~/server/domain/catalogue/read-links'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/links', async ({ db, query }) => listLinks({ db }, query))
