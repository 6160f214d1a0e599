import { judgeAllowance } from '~~/server/domain/bench/judge-link'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/bench/allowance', async ({ body }) => judgeAllowance(body))
