import { listSlots } from '~~/server/domain/schedule/list-slots'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/slots', async ({ db, now }) => listSlots({ db, now }))
