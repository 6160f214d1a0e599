import { listUploads } from '~~/server/domain/elements/show-uploads'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/element-sets/uploads', ({ db, query }) => listUploads({ db }, query))
