import { listCalendarAddresses } from '~~/server/domain/calendar/calendar-addresses'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/auth/calendars', ({ db, actor }) => listCalendarAddresses({ db }, { personId: actor.id }))
