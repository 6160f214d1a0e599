import { changeSettings } from '~~/server/domain/settings/change-settings'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/settings', async ({ db, actor, now, body }) => changeSettings({ db, actor, now }, body))
