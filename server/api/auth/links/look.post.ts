import { lookAtOneTimeLink } from '~~/server/domain/auth/one-time-links'
import { defineRoute } from '~~/server/http/define-route'
import { throttleOneTimeLink } from '~~/server/http/throttle'

export default defineRoute('POST /api/auth/links/look', async ({ event, db, now, body }) => throttleOneTimeLink(event, () => lookAtOneTimeLink({ db, now }, body.token)))
