import { getPass } from '~~/server/domain/tables/list-passes'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/passes/{id}', async ({ db, params }) => getPass({ db }, params.id))
