import { settingsOverview } from '~~/server/domain/settings/settings-overview'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/settings', async ({ db, actor }) => settingsOverview({ db, actor }))
