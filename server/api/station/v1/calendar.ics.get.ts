import { readStationCalendar } from '~~/server/domain/calendar/read-station-calendar'
import { defineRoute } from '~~/server/http/define-route'
import { serveCalendar } from '~~/server/http/serve-calendar'

export default defineRoute('GET /api/station/v1/calendar.ics', async ({ event, db, now, actor }) =>
  serveCalendar(event, await readStationCalendar({ db, now }, actor.stationId), now))
