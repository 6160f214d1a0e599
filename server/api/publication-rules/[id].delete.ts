import { removePublicationRule } from '~~/server/domain/schedule/publication-rules'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/publication-rules/{id}', async ({ db, actor, now, params }) => {
  await removePublicationRule({ db, actor, now }, params.id)
  return undefined
})
