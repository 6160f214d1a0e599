import { listAudit } from '~~/server/domain/audit-trail/list-audit'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/audit', async ({ db, query }) => listAudit({ db }, query))
