import { listKeys } from '~~/server/domain/keys/read-keys'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/keys', async ({ db, query }) => listKeys({ db }, query))
