import { previewSlots } from '~~/server/domain/schedule/preview-slots'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/slots/preview', async ({ db, now, query }) => previewSlots({ db, now }, query))
