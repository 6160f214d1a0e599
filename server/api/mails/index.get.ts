import { listMails } from '~~/server/domain/mails/list-mails'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/mails', async ({ db, query }) => listMails({ db }, query))
