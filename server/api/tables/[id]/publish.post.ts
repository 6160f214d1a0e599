import { publishTable } from '~~/server/domain/tables/publish-table'
import { requirePerson } from '~~/server/domain/tables/require-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/tables/{id}/publish', async ({ db, now, actor, params, body }) => publishTable({ db, now, actor: requirePerson(actor) }, { ...body, id: params.id }))
