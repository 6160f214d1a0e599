import { listReceivedMails } from '~~/server/domain/mails/list-received-mails'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/demo/mail', async ({ db, actor, query }) => listReceivedMails({ db, actor }, query))
