import { previewSet } from '~~/server/domain/elements/preview-set'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/element-sets/{id}/preview', ({ db, now, params }) => previewSet({ db, now }, params))
