import { listUploadNotes } from '~~/server/domain/elements/upload-notes'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/element-sets/uploads/{id}/notes', ({ db, params, query }) => listUploadNotes({ db }, params.id, query))
