import { listElementSets } from '~~/server/domain/elements/read-element-sets'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/element-sets', ({ db, now, query }) => listElementSets({ db, now }, query))
