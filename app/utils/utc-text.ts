import { formatUtc } from '#shared/utils/format'

/** An instant as people type it, in UTC without saying so each time: 2026-12-01 03:10. */
export const utcText = (ms: number): string => formatUtc(ms, 'minute').replace(' UTC', '')

/** What was typed as an instant of the interface; what is no instant stays as it is, for the schema to say so. */
export function readUtcText(text: string): string {
  const match = /^(\d{4}-\d{2}-\d{2})[ T](\d{2}:\d{2}(?::\d{2})?)(?: ?(?:UTC|Z))?$/i.exec(text.trim())
  return match ? `${match[1]}T${match[2]}Z` : text
}
