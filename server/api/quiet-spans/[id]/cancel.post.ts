import { cancelQuietSpan } from '~~/server/domain/quiet-spans/cancel-quiet-span'
import { requirePerson } from '~~/server/domain/tables/require-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/quiet-spans/{id}/cancel', async ({ db, actor, now, params, body }) => cancelQuietSpan({ db, actor: requirePerson(actor), now }, { id: params.id, reason: body?.reason }))
