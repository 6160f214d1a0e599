import { createAntenna } from '~~/server/domain/catalogue/create-antenna'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/antennas', async ({ db, actor, now, body }) => createAntenna({ db, actor, now }, body))
