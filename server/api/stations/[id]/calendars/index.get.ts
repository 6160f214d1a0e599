import { listCalendarAddresses } from '~~/server/domain/calendar/calendar-addresses'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/stations/{id}/calendars', ({ db, params }) => listCalendarAddresses({ db }, { stationId: params.id }))
