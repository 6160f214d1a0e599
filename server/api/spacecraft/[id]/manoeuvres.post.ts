import { addManoeuvre } from '~~/server/domain/manoeuvres/add-manoeuvre'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/spacecraft/{id}/manoeuvres', ({ db, now, actor, params, body }) => addManoeuvre({ db, now, actor }, params.id, body))
