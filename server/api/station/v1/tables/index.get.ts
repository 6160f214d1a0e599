import { listFeed } from '~~/server/domain/station/list-feed'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/station/v1/tables', async ({ db, now, actor, query }) => listFeed({ db, now }, { stationId: actor.stationId, ...query }))
