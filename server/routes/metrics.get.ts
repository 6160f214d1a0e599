import { setResponseHeader } from 'h3'
import { readMetrics } from '~~/server/domain/metrics/read-metrics'
import { defineRoute } from '~~/server/http/define-route'
import { metricsType, writeMetrics } from '~~/server/http/metrics-text'
import { processMetrics } from '~~/server/http/process-metrics'
import { requestMetrics } from '~~/server/http/request-metrics'

export default defineRoute('GET /metrics', async ({ event, db, now }) => {
  const text = writeMetrics([...processMetrics(), ...requestMetrics.families(), ...await readMetrics({ db, now })])
  setResponseHeader(event, 'content-type', metricsType)
  return text as never
})
