import { listManoeuvres } from '~~/server/domain/manoeuvres/read-manoeuvres'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/spacecraft/{id}/manoeuvres', ({ db, params, query }) => listManoeuvres({ db }, params.id, query))
