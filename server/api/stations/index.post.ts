import { createStation } from '~~/server/domain/catalogue/create-station'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/stations', async ({ db, actor, now, body }) => createStation({ db, actor, now }, body))
