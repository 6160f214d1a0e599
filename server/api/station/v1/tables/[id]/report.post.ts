import { reportTable } from '~~/server/domain/station/report-table'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/station/v1/tables/{id}/report', async ({ db, now, actor, params, body }) => {
  await reportTable({ db, now, actor }, { stationId: actor.stationId, tableId: params.id, ...body })
  return undefined
})
