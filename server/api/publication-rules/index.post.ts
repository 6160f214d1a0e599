import { setPublicationRule } from '~~/server/domain/schedule/publication-rules'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/publication-rules', async ({ db, actor, now, body }) => setPublicationRule({ db, actor, now }, body))
