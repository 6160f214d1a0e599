import { enterQuietSpan } from '~~/server/domain/quiet-spans/enter-quiet-span'
import { requirePerson } from '~~/server/domain/tables/require-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/quiet-spans', async ({ db, actor, now, body }) => enterQuietSpan({ db, actor: requirePerson(actor), now }, body))
