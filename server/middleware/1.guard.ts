import { randomUUID } from 'node:crypto'
import { defineEventHandler, setResponseHeader } from 'h3'
import { routes } from '#shared/routes'
import { DomainError } from '~~/server/domain/errors'
import { answerProblem } from '~~/server/http/problem'
import { isWorker } from '~~/server/jobs/boot'

const known = Object.keys(routes).map((name) => {
  const [method, path] = name.split(' ') as [string, string]
  return { method, pattern: new RegExp(`^${path.replaceAll('.', '\\.').replace(/\{\w+\}/g, '[^/]+')}$`) }
})

/** Gives each request an id; what is under /api and not in the route table does not exist, whoever provides it. */
export default defineEventHandler((event) => {
  event.context.requestId = randomUUID()
  setResponseHeader(event, 'x-request-id', event.context.requestId)
  const path = event.path.split('?', 1)[0]!
  if (isWorker() && !path.startsWith('/api/health/')) return answerProblem(event, new DomainError('not-found', 'This process only works; servers answer.'))
  if (path !== '/api' && !path.startsWith('/api/') || path.startsWith('/api/_nuxt_icon/')) return
  // What a GET answers, without its body: Node leaves that out by itself. The routers know no HEAD.
  if (event.method === 'HEAD') Object.assign(event, { _method: 'GET' })
  if (!known.some(route => route.method === event.method && route.pattern.test(path))) {
    return answerProblem(event, new DomainError('not-found', 'There is nothing under this address.'))
  }
})
