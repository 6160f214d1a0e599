import { uploadReportCsv } from '~~/server/domain/elements/upload-report-csv'
import { defineRoute } from '~~/server/http/define-route'
import { serveCsv } from '~~/server/http/serve-csv'

export default defineRoute('GET /api/element-sets/uploads/{id}/report.csv', async ({ event, db, params }) =>
  serveCsv(event, `upload-${params.id}.csv`, await uploadReportCsv({ db }, params.id)))
