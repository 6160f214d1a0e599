import { closeAlert } from '~~/server/domain/alerts/close-alert'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/alerts/{id}/close', async ({ db, now, actor, params, body }) => closeAlert({ db, now, actor }, { alertId: params.id, reason: body?.reason }))
