import { defineRoute } from '~~/server/http/define-route'
import type { OpenApiDocument } from '~~/server/http/open-api/describe-interface'
import { describeInterface } from '~~/server/http/open-api/describe-interface'
import { publicUrl, sessionCookieName } from '~~/server/http/session'

/** The table does not change while the server runs. */
let described: OpenApiDocument | null = null

export default defineRoute('GET /api/openapi.json', async () => described ??= describeInterface({ url: publicUrl().origin, sessionCookieName: sessionCookieName() }))
