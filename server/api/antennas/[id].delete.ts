import { retireAntenna } from '~~/server/domain/catalogue/retire-antenna'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/antennas/{id}', async ({ db, actor, now, params }) => {
  await retireAntenna({ db, actor, now }, params.id)
  return undefined
})
