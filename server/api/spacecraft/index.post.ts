import { createSpacecraft } from '~~/server/domain/catalogue/create-spacecraft'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/spacecraft', async ({ db, actor, now, body }) => createSpacecraft({ db, actor, now }, body))
