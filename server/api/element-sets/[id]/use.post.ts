import { useElementSet } from '~~/server/domain/elements/use-element-set'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/{id}/use', ({ db, now, actor, params }) => useElementSet({ db, now, actor }, params))
