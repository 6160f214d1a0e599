import { rotateSigningKey } from '~~/server/domain/tables/rotate-signing-key'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/signing-keys', ({ db, now, actor }) => rotateSigningKey({ db, now, actor }))
