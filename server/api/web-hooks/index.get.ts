import { listWebHooks } from '~~/server/domain/web-hooks/read-web-hooks'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/web-hooks', async ({ db, query }) => listWebHooks({ db }, query))
