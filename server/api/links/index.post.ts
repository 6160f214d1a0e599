import { createLink } from '~~/server/domain/catalogue/create-link'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/links', async ({ db, actor, now, body }) => createLink({ db, actor, now }, body))
