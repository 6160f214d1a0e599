import { invitePerson } from '~~/server/domain/people/invite-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/people', async ({ db, actor, now, body }) => invitePerson({ db, actor, now }, body))
