import { getElementSet } from '~~/server/domain/elements/read-element-sets'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/element-sets/{id}', ({ db, now, params }) => getElementSet({ db, now }, params.id))
