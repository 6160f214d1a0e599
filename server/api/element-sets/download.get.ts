import { downloadElementSets } from '~~/server/domain/elements/download-element-sets'
import { defineRoute } from '~~/server/http/define-route'
import { sendElements } from '~~/server/http/send-elements'

export default defineRoute('GET /api/element-sets/download', async ({ event, db, now, query }) =>
  sendElements(event, await downloadElementSets({ db, now }, query)))
