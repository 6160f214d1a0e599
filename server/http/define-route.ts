import type { H3Event } from 'h3'
import { defineEventHandler, getQuery, getRequestHeader, getRouterParams, setResponseHeader, setResponseStatus } from 'h3'
import type { z } from 'zod'
import type { RouteAnswer, RouteBody, RouteName, RouteParams, RouteQuery, RouteSpec, Routes } from '#shared/routes'
import { routes } from '#shared/routes'
import { findUnstorable } from '#shared/storable-text'
import type { Actor, KeyActor, PersonActor } from '~~/server/domain/context'
import type { FieldError } from '~~/server/domain/errors'
import { DomainError } from '~~/server/domain/errors'
import type { Db } from '~~/server/database/client'
import { databaseNow, useDatabase } from '~~/server/database/client'
import { fieldErrors } from './field-errors'
import { answerOnce } from './idempotency'
import { authenticate, authorise } from './authenticate'
import { answerProblem } from './problem'
import { readJson } from './read-body'

type ActorFor<R extends RouteName> =
  Routes[R]['access'] extends { kind: 'public' } ? Actor | null
    : Routes[R]['access'] extends { kind: 'person' } ? PersonActor
      : Routes[R]['access'] extends { kind: 'station-key' } ? KeyActor & { stationId: string }
        : PersonActor | KeyActor

export interface RouteContext<R extends RouteName> {
  event: H3Event
  db: Db
  now: Date
  actor: ActorFor<R>
  params: RouteParams<R>
  query: RouteQuery<R>
  body: RouteBody<R>
}

/** Authorise, validate, act: in this order, for every route, from the line of the route table it names. */
export function defineRoute<R extends RouteName>(name: R, act: (context: RouteContext<R>) => Promise<RouteAnswer<R>>) {
  const spec: RouteSpec = routes[name]
  return defineEventHandler(async (event) => {
    try {
      event.context.routeName = name
      setResponseHeader(event, 'cache-control', 'private, no-store')
      // Health must answer without a database.
      if (spec.access.kind === 'public' && event.method === 'GET' && !spec.params) return await act({ event } as RouteContext<R>)
      const { db } = useDatabase()
      // Who holds a secret address needs neither session nor key, and is not refused for a wrong one.
      if (spec.access.kind === 'public' && event.method === 'GET') {
        const params = parse(spec.params!, getRouterParams(event), 'not-found')
        return await act({ event, db, now: await databaseNow(db), actor: null, params } as RouteContext<R>)
      }
      const { actor, now } = await authenticate(event, db)
      authorise(spec.access, actor)
      const params = spec.params && parse(spec.params, getRouterParams(event), 'not-found')
      const query = spec.query && parse(spec.query, getQuery(event), 'not-valid')
      const body = spec.body && parse(spec.body, await readJson(event, spec.bodyLimit), 'not-valid')
      const context = { event, db, now, actor, params, query, body } as RouteContext<R>
      const answer = spec.creates && getRequestHeader(event, 'idempotency-key') !== undefined && !spec.rawBody
        ? await answerOnce(event, { db, now, actor, route: name, body, status: spec.status ?? 200 }, () => act(context))
        : await act(context)
      if (event.node.res.statusCode === 200) setResponseStatus(event, spec.status ?? 200)
      return spec.status === 204 ? null : answer
    }
    catch (error) {
      return answerProblem(event, error)
    }
  })
}

function parse(schema: z.ZodType, value: unknown, code: 'not-found' | 'not-valid'): unknown {
  const unstorable = code === 'not-valid' ? findUnstorable(value) : null
  if (unstorable) throw notValid([unstorable])
  const result = schema.safeParse(value)
  if (result.success) return result.data
  if (code === 'not-found') throw new DomainError('not-found', 'There is nothing under this address.')
  throw notValid(fieldErrors(result.error.issues))
}

const notValid = (fields: readonly FieldError[]) =>
  new DomainError('not-valid', fields.length === 1 ? `${fields[0]!.path || 'body'}: ${fields[0]!.message}` : `${fields.length} fields need mending.`, fields)
