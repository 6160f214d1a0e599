import { testWebHook } from '~~/server/domain/web-hooks/test-web-hook'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/web-hooks/{id}/test', async ({ db, actor, now, params }) => testWebHook({ db, actor, now }, params.id))
