import { withdrawTable } from '~~/server/domain/tables/withdraw-table'
import { requirePerson } from '~~/server/domain/tables/require-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/tables/{id}/withdraw', async ({ db, now, actor, params, body }) => withdrawTable({ db, now, actor: requirePerson(actor) }, { ...body, id: params.id }))
