import { makeCalendarAddress } from '~~/server/domain/calendar/calendar-addresses'
import { defineRoute } from '~~/server/http/define-route'
import { calendarsUrl } from '~~/server/http/serve-calendar'

export default defineRoute('POST /api/stations/{id}/calendars', ({ db, now, actor, params }) => makeCalendarAddress({ db, now, actor }, { owner: { stationId: params.id }, calendarsUrl: calendarsUrl() }))
