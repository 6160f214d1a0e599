import { revokeCalendarAddress } from '~~/server/domain/calendar/calendar-addresses'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/stations/{id}/calendars/{calendarId}', async ({ db, now, actor, params }) => {
  await revokeCalendarAddress({ db, now, actor }, { owner: { stationId: params.id }, id: params.calendarId })
  return undefined
})
