import { compareElementSet } from '~~/server/domain/elements/compare-element-set'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/element-sets/{id}/comparison', ({ db, now, params }) => compareElementSet({ db, now }, params))
