import { approveTable } from '~~/server/domain/tables/approve-table'
import { requirePerson } from '~~/server/domain/tables/require-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/tables/{id}/approve', async ({ db, now, actor, params, body }) => approveTable({ db, now, actor: requirePerson(actor) }, { ...body, id: params.id }))
