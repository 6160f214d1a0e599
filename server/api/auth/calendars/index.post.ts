import { makeCalendarAddress } from '~~/server/domain/calendar/calendar-addresses'
import { defineRoute } from '~~/server/http/define-route'
import { calendarsUrl } from '~~/server/http/serve-calendar'

export default defineRoute('POST /api/auth/calendars', ({ db, now, actor }) => makeCalendarAddress({ db, now, actor }, { owner: { personId: actor.id }, calendarsUrl: calendarsUrl() }))
