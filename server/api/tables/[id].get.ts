import { getTable } from '~~/server/domain/tables/get-table'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/tables/{id}', async ({ db, now, params }) => getTable({ db, now }, params.id))
