import { refuseElementSet } from '~~/server/domain/elements/refuse-element-set'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/{id}/refuse', ({ db, now, actor, params, body }) => refuseElementSet({ db, now, actor }, { ...params, ...body }))
