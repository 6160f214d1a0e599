import { forgetServer } from '~~/server/domain/servers/forget-server'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/servers/{id}/forget', async ({ db, actor, now, params }) => {
  await forgetServer({ db, actor, now }, params.id)
  return undefined
})
