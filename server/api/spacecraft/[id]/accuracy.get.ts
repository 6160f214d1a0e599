import { accuracyOf } from '~~/server/domain/prediction/accuracy-of'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/spacecraft/{id}/accuracy', async ({ db, params, query }) => accuracyOf({ db }, params.id, { pairs: query.pairs === 'true' }))
