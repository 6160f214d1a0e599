import { findCalendar } from '~~/server/domain/calendar/find-calendar'
import { defineRoute } from '~~/server/http/define-route'
import { pagesUrl, serveCalendar } from '~~/server/http/serve-calendar'

export default defineRoute('GET /api/calendars/{token}', async ({ event, db, now, params }) =>
  serveCalendar(event, await findCalendar({ db, now }, { token: params.token, pagesUrl: pagesUrl() }), now))
