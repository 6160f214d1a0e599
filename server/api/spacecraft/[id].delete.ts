import { retireSpacecraft } from '~~/server/domain/catalogue/retire-spacecraft'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/spacecraft/{id}', async ({ db, actor, now, params }) => {
  await retireSpacecraft({ db, actor, now }, params.id)
  return undefined
})
