import { handleOneUnassigned } from '~~/server/domain/elements/handle-unassigned'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/{id}/drop', ({ db, now, actor, params }) => handleOneUnassigned({ db, now, actor }, 'dropped', params))
