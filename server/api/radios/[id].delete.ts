import { retireRadio } from '~~/server/domain/catalogue/retire-radio'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/radios/{id}', async ({ db, actor, now, params }) => {
  await retireRadio({ db, actor, now }, params.id)
  return undefined
})
