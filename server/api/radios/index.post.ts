import { createRadio } from '~~/server/domain/catalogue/create-radio'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/radios', async ({ db, actor, now, body }) => createRadio({ db, actor, now }, body))
