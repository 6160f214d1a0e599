import { defineNitroPlugin } from 'nitropack/runtime'
import { serves } from '~~/server/jobs/boot'
import { requestMetrics } from '~~/server/http/request-metrics'

/** Measures every request from its arrival to the end of its answer. */
export default defineNitroPlugin((nitroApp) => {
  if (!serves()) return
  nitroApp.hooks.hook('request', (event) => {
    const began = performance.now()
    const { req, res } = event.node
    res.once('close', () => requestMetrics.count({
      method: req.method ?? '',
      route: typeof event.context.routeName === 'string' ? event.context.routeName.slice(event.context.routeName.indexOf(' ') + 1) : kindOf(event.path),
      status: res.writableFinished ? res.statusCode : null,
      seconds: (performance.now() - began) / 1000,
    }))
  })
})

function kindOf(path: string): string {
  if (path.startsWith('/_nuxt/')) return 'asset'
  return path.startsWith('/api/') ? 'unknown' : 'page'
}
