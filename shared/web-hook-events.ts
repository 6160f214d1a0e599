/** What a web hook can be told of. */
export const webHookEvents = ['table.published', 'table.superseded', 'table.withdrawn', 'alert.opened', 'alert.closed'] as const
export type WebHookEvent = typeof webHookEvents[number]

export const webHookEventNames: Record<WebHookEvent, string> = {
  'table.published': 'a table is published',
  'table.superseded': 'a newer revision takes a published one’s place',
  'table.withdrawn': 'a table is withdrawn',
  'alert.opened': 'an alert opens',
  'alert.closed': 'an alert closes',
}

/** Sent on request only, to see whether a receiver works. */
export const testEvent = 'hook.test'
