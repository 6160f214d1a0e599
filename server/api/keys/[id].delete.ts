import { revokeKey } from '~~/server/domain/keys/revoke-key'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/keys/{id}', async ({ db, actor, now, params }) => {
  await revokeKey({ db, actor, now }, params.id)
  return undefined
})
