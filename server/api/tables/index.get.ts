import { listTables } from '~~/server/domain/tables/list-tables'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/tables', async ({ db, now, query }) => listTables({ db, now }, query))
