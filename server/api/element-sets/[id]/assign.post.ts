import { assignElementSet } from '~~/server/domain/elements/assign-element-sets'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/{id}/assign', ({ db, now, actor, params, body }) => assignElementSet({ db, now, actor }, { ...params, ...body }))
