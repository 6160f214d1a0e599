import { listStations } from '~~/server/domain/catalogue/read-stations'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/stations', async ({ db, query }) => listStations({ db }, query))
