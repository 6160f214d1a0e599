import { downloadElementSets } from '~~/server/domain/elements/download-element-sets'
import { defineRoute } from '~~/server/http/define-route'
import { sendElements } from '~~/server/http/send-elements'

export default defineRoute('GET /api/element-sets/{id}/download', async ({ event, db, now, params, query }) =>
  sendElements(event, await downloadElementSets({ db, now }, { ids: [params.id], notation: query.notation })))
