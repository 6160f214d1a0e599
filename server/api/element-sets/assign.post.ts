import { assignElementSets } from '~~/server/domain/elements/assign-element-sets'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/assign', ({ db, now, actor, body }) => assignElementSets({ db, now, actor }, body))
