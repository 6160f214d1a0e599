import { handleUnassigned } from '~~/server/domain/elements/handle-unassigned'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/keep', ({ db, now, actor, body }) => handleUnassigned({ db, now, actor }, 'kept', body))
