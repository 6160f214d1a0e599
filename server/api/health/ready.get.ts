import { setResponseStatus } from 'h3'
import { checkReadiness } from '~~/server/domain/schedule/check-readiness'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/health/ready', async ({ event }) => {
  const checks = await checkReadiness()
  const ready = Object.values(checks).every(state => state === 'ok')
  if (!ready) setResponseStatus(event, 503)
  return { status: ready ? 'ready' as const : 'not-ready' as const, checks }
})
