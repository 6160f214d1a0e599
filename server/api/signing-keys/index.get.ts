import { showSigningKeys } from '~~/server/domain/tables/show-signing-keys'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/signing-keys', ({ db, now }) => showSigningKeys({ db, now }))
