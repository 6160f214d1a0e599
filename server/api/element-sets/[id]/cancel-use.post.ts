import { cancelUse } from '~~/server/domain/elements/schedule-use'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/{id}/cancel-use', ({ db, now, actor, params }) => cancelUse({ db, now, actor }, params))
