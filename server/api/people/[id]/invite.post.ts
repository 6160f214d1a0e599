import { inviteAgain } from '~~/server/domain/people/send-invitation'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/people/{id}/invite', async ({ db, actor, now, params }) => {
  await inviteAgain({ db, actor, now }, params.id)
  return undefined
})
