import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/health/live', async () => ({ status: 'live' as const }))
