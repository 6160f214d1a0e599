import { revokeCalendarAddress } from '~~/server/domain/calendar/calendar-addresses'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('DELETE /api/auth/calendars/{id}', async ({ db, now, actor, params }) => {
  await revokeCalendarAddress({ db, now, actor }, { owner: { personId: actor.id }, id: params.id })
  return undefined
})
