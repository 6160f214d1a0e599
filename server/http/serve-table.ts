import type { H3Event } from 'h3'
import { getRequestHeader, send, setResponseHeaders, setResponseStatus } from 'h3'
import type { Deps, KeyActor } from '~~/server/domain/context'
import { collectTable } from '~~/server/domain/station/collect-table'
import { entityTag, matchTag } from '~~/server/domain/station/entity-tag'
import { chooseNotation, notations } from '~~/server/domain/station/notation'
import type { FeedTable } from '~~/server/domain/station/read-feed-table'
import { readFeedTable, writeFeedTable } from '~~/server/domain/station/read-feed-table'
import { describeError } from './describe-error'
import { log } from './log'

type Request = Deps<KeyActor & { stationId: string }> & { event: H3Event, params: { id: string } }

/**
 * One table by content negotiation and conditional request. A 200 that went out whole, or a 304 to the tag of this very
 * revision, marks it collected; an answer that was broken off does not.
 */
export async function serveTable({ event, db, now, actor, params }: Request): Promise<undefined> {
  setResponseHeaders(event, { 'cache-control': 'private, no-cache', 'vary': 'Accept' })
  const notation = chooseNotation(getRequestHeader(event, 'accept'))
  const table = await readFeedTable({ db }, { stationId: actor.stationId, tableId: params.id })
  const tag = entityTag(table.digest, notation)
  setResponseHeaders(event, { 'etag': tag, 'table-revision': String(table.revision), 'table-digest': `sha-256=${table.digest}`, 'table-signature': table.signature })
  const match = matchTag(getRequestHeader(event, 'if-none-match'), tag)
  const text = match === 'none' ? await writeFeedTable({ db }, table, notation) : null
  if (match !== 'any' && event.node.req.method !== 'HEAD' && !table.isCollected) collectWhenSent(event, { db, now, actor }, table)
  if (text === null) {
    setResponseStatus(event, 304)
    await send(event, null)
    return
  }
  await send(event, text, `${notations[notation]}; charset=utf-8`)
}

function collectWhenSent(event: H3Event, deps: Deps, table: FeedTable): void {
  const { req, res } = event.node
  res.once('finish', () => {
    // Node says `finish` also where the connection was lost before the last bytes were taken.
    if (req.socket.destroyed) return
    collectTable(deps, table).catch(error => log.error({ requestId: event.context.requestId, tableId: table.tableId, error: describeError(error) }, 'a fetched table could not be marked collected'))
  })
}
