import { changePerson } from '~~/server/domain/people/change-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('PATCH /api/people/{id}', async ({ db, actor, now, params, body }) => changePerson({ db, actor, now }, params.id, body))
