import type { AlertOut } from '#shared/schemas/alerts'

/** Acknowledging and closing, with what the person may do with which alert. */
export function useAlertActions(done: () => unknown) {
  const me = useMe()
  const mayAct = (alert: AlertOut) => me.may('alerts:act-on-any') || (me.may('alerts:act') && alert.kind === 'decision-due')
  const acknowledge = useAction(async (alert: AlertOut) => {
    await callApi('POST /api/alerts/{id}/acknowledge', { params: { id: alert.id } })
    await done()
  })
  const close = useAction(async (alert: AlertOut, reason: string) => {
    await callApi('POST /api/alerts/{id}/close', { params: { id: alert.id }, body: { reason } })
    await done()
    return true
  })
  return { mayAct, acknowledge, close }
}
