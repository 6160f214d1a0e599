import { listPeople } from '~~/server/domain/people/read-people'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/people', async ({ db, query }) => listPeople({ db }, query))
