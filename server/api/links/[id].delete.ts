import { retireLink } from '~~/server/domain/catalogue/retire-link'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/links/{id}', async ({ db, actor, now, params }) => {
  await retireLink({ db, actor, now }, params.id)
  return undefined
})
