import { readKeys } from '~~/server/domain/station/read-keys'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/station/v1/keys', async ({ db, now }) => readKeys({ db, now }))
