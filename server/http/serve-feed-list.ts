import { createHash } from 'node:crypto'
import type { H3Event } from 'h3'
import { getRequestHeader, send, setResponseHeaders, setResponseStatus } from 'h3'
import type { RouteAnswer, RouteQuery } from '#shared/routes'
import type { Deps, KeyActor } from '~~/server/domain/context'
import { matchTag } from '~~/server/domain/station/entity-tag'
import { listFeed } from '~~/server/domain/station/list-feed'

type List = 'GET /api/station/v1/tables'
type Request = Deps<KeyActor & { stationId: string }> & { event: H3Event, query: RouteQuery<List> }

/** A station's list by conditional request: a controller that asks often is told in few bytes that nothing has changed. */
export async function serveFeedList({ event, db, now, actor, query }: Request): Promise<RouteAnswer<List>> {
  const list = await listFeed({ db, now }, { stationId: actor.stationId, ...query })
  const tag = `"${createHash('sha256').update(JSON.stringify(list)).digest('hex')}"`
  setResponseHeaders(event, { 'cache-control': 'private, no-cache', 'etag': tag })
  if (matchTag(getRequestHeader(event, 'if-none-match'), tag) !== 'none') {
    setResponseStatus(event, 304)
    await send(event, null)
  }
  return list
}
