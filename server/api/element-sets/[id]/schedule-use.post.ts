import { scheduleUse } from '~~/server/domain/elements/schedule-use'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/{id}/schedule-use', ({ db, now, actor, params, body }) => scheduleUse({ db, now, actor }, { ...params, ...body }))
