import { getUpload } from '~~/server/domain/elements/show-uploads'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/element-sets/uploads/{id}', ({ db, params }) => getUpload({ db }, params.id))
