import { handleOneUnassigned } from '~~/server/domain/elements/handle-unassigned'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/{id}/keep', ({ db, now, actor, params }) => handleOneUnassigned({ db, now, actor }, 'kept', params))
