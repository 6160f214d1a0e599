import { formatCountdown, formatUtc } from '#shared/utils/format'
import { pageAddress } from './addresses'
import type { Letter } from './letter'
import { composeLetter } from './letter'

export interface AlertLetterData {
  id: string
  severity: 'call' | 'notice'
  title: string
  detail: string
  action: string
  spacecraftName: string | null
  stationName: string | null
  /** First AOS or other instant that it is about. */
  dueAt: Date | null
  count: number
  now: Date
  organisation: string
  /** It called as a notice before. */
  raised?: boolean
}

/** What, when, how bad, what to do; the link opens the alert's page, whose button acknowledges. */
export function alertLetter(alert: AlertLetterData): Letter {
  const facts: [string, string][] = []
  if (alert.spacecraftName) facts.push(['Spacecraft', alert.spacecraftName])
  if (alert.stationName) facts.push(['Station', alert.stationName])
  if (alert.dueAt) facts.push(['When', `${formatUtc(alert.dueAt.getTime(), 'second')} (${formatCountdown(alert.dueAt.getTime() - alert.now.getTime())})`])
  if (alert.count > 1) facts.push(['Tables concerned', String(alert.count)])
  facts.push(['Severity', alert.severity === 'call' ? 'call: somebody has to act' : 'notice'])
  return composeLetter({
    subject: `${alert.severity === 'call' ? 'ALERT' : 'Notice'}: ${alert.title}`,
    heading: alert.title,
    paragraphs: [...(alert.raised ? ['This was a notice until now; nobody has dealt with it.'] : []), alert.detail, `What to do: ${alert.action}`],
    facts,
    button: { label: 'Open the alert and acknowledge it', address: pageAddress(`/alerts/${alert.id}`) },
    closing: `${alert.organisation}, written at ${formatUtc(alert.now.getTime(), 'second')}. One mail is sent for one cause; the page shows how it stands now.`,
  })
}
