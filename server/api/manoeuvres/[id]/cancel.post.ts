import { cancelManoeuvre } from '~~/server/domain/manoeuvres/cancel-manoeuvre'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/manoeuvres/{id}/cancel', ({ db, now, actor, params }) => cancelManoeuvre({ db, now, actor }, params))
