import { retireWebHook } from '~~/server/domain/web-hooks/retire-web-hook'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/web-hooks/{id}', async ({ db, actor, now, params }) => {
  await retireWebHook({ db, actor, now }, params.id)
  return undefined
})
