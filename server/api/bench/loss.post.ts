import { judgeLoss } from '~~/server/domain/bench/judge-link'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/bench/loss', async ({ body }) => judgeLoss(body))
