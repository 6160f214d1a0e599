import { listPublicationRules } from '~~/server/domain/schedule/publication-rules'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/publication-rules', async ({ db, query }) => listPublicationRules({ db }, query))
