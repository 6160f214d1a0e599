import type { H3Event } from 'h3'
import { getRequestHeader, send, setResponseHeaders, setResponseStatus } from 'h3'
import { passCalendar } from '#shared/formats/pass-calendar'
import type { Calendar } from '~~/server/domain/calendar/read-calendar'
import { matchTag } from '~~/server/domain/station/entity-tag'
import { publicUrl } from './session'

/** What addresses of calendars begin with, and those of pages. */
export const calendarsUrl = () => `${publicUrl().origin}/api/calendars`
export const pagesUrl = () => publicUrl().origin

/** A calendar by conditional request. The tag is weak: each sending bears its own instant. */
export async function serveCalendar(event: H3Event, { name, passes, tag: content }: Calendar, now: Date): Promise<undefined> {
  const tag = `"${content}"`
  setResponseHeaders(event, { 'cache-control': 'private, no-cache', 'etag': `W/${tag}`, 'content-disposition': 'inline; filename="passes.ics"' })
  if (matchTag(getRequestHeader(event, 'if-none-match'), tag) !== 'none') {
    setResponseStatus(event, 304)
    await send(event, null)
    return
  }
  await send(event, passCalendar({ name, passes, stamp: now }), 'text/calendar; charset=utf-8; method=PUBLISH')
}
