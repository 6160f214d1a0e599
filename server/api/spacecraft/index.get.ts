import { listSpacecraft } from '~~/server/domain/catalogue/read-spacecraft'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/spacecraft', async ({ db, now, query }) => listSpacecraft({ db, now }, query))
