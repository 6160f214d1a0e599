import { listAlerts } from '~~/server/domain/alerts/read-alerts'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/alerts', async ({ db, query }) => listAlerts({ db }, query))
