import { cancelUpload } from '~~/server/domain/elements/cancel-upload'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/element-sets/uploads/{id}/cancel', ({ db, now, actor, params }) => cancelUpload({ db, now, actor }, params))
