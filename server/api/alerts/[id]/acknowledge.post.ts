import { acknowledgeAlert } from '~~/server/domain/alerts/acknowledge-alert'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/alerts/{id}/acknowledge', async ({ db, now, actor, params }) => acknowledgeAlert({ db, now, actor }, params.id))
