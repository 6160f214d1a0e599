import { createKey } from '~~/server/domain/keys/create-key'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/keys', async ({ db, actor, now, body }) => createKey({ db, actor, now }, body))
