import { listPasses } from '~~/server/domain/tables/list-passes'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/passes', async ({ db, query }) => listPasses({ db }, query))
