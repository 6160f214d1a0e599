import { countSets } from '~~/server/domain/elements/unassigned-sets'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/element-sets/counts', ({ db }) => countSets({ db }))
