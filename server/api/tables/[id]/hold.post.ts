import { holdTable } from '~~/server/domain/tables/hold-table'
import { requirePerson } from '~~/server/domain/tables/require-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/tables/{id}/hold', async ({ db, now, actor, params, body }) => holdTable({ db, now, actor: requirePerson(actor) }, { ...body, id: params.id }))
