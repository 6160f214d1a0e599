import { retryMail } from '~~/server/domain/mails/retry-mail'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/mails/{id}/retry', async ({ db, actor, now, params }) => retryMail({ db, actor, now }, params.id))
