import { defineRoute } from '~~/server/http/define-route'
import { serveTable } from '~~/server/http/serve-table'

export default defineRoute('GET /api/station/v1/tables/{id}', serveTable)
