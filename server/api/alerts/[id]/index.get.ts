import { readAlert } from '~~/server/domain/alerts/read-alerts'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/alerts/{id}', async ({ db, params }) => readAlert({ db }, params.id))
