import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/clock', async ({ now }) => ({ now: now.toISOString() }))
