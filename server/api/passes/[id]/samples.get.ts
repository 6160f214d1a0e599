import { samplePass } from '~~/server/domain/tables/sample-pass'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/passes/{id}/samples', async ({ db, now, params, query }) => samplePass({ db, now }, { id: params.id, stepS: query.stepS }))
