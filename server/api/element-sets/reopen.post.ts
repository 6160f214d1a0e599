import { handleUnassigned } from '~~/server/domain/elements/handle-unassigned'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/reopen', ({ db, now, actor, body }) => handleUnassigned({ db, now, actor }, 'open', body))
