import { retireStation } from '~~/server/domain/catalogue/retire-station'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/stations/{id}', async ({ db, actor, now, params }) => {
  await retireStation({ db, actor, now }, params.id)
  return undefined
})
