import { listConflicts } from '~~/server/domain/antennas/find-conflicts'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/antenna-conflicts', async ({ db, now, query }) => listConflicts({ db, now }, query))
