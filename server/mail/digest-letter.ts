import { formatHz, formatLocalTime, formatUtc, formatUtcTime } from '#shared/utils/format'
import { pageAddress } from './addresses'
import type { Letter } from './letter'
import { composeLetter } from './letter'

export interface DigestPass { aos: Date, los: Date, spacecraftName: string, stationName: string, tables: number }
export interface DigestDecision { aos: Date, spacecraftName: string, stationName: string, linkName: string, state: string, verdict: string, worstResidualHz: number, allowanceHz: number }
export interface DigestLetterData {
  organisation: string
  /** The reader's own zone: local time stands beside UTC. */
  zone: string
  from: Date
  to: Date
  passes: readonly DigestPass[]
  decisions: readonly DigestDecision[]
  verdicts: { holds: number, tight: number, breaks: number }
  standingAlerts: readonly string[]
  now: Date
}

/** Past this many lines the page is the better place to read. */
const longest = 60

/** The night's passes, what waits for a decision, and how the tables stand. */
export function digestLetter(night: DigestLetterData): Letter {
  const { passes, decisions, verdicts, zone } = night
  const span = `${formatUtc(night.from.getTime(), 'minute')} to ${formatUtc(night.to.getTime(), 'minute')}`
  const total = verdicts.holds + verdicts.tight + verdicts.breaks
  return composeLetter({
    subject: `Tonight: ${count(passes.length, 'pass', 'passes')}, ${count(decisions.length, 'decision', 'decisions')} due`,
    heading: `The night from ${span}`,
    paragraphs: [decisions.length === 0 ? 'No table waits for a decision.' : `${count(decisions.length, 'table waits', 'tables wait')} for a decision. A table that is not published at AOS lapses.`],
    facts: [
      ['Passes', String(passes.length)],
      ['Tables', `${total}: ${verdicts.holds} hold, ${verdicts.tight} tight, ${verdicts.breaks} break`],
      ['Your time', `${formatLocalTime(night.from.getTime(), zone)} to ${formatLocalTime(night.to.getTime(), zone)}, ${zone}`],
    ],
    list: [
      { title: 'Decisions due', lines: shorten(decisions.map(decisionLine)), none: 'None.' },
      { title: 'Passes (AOS to LOS)', lines: shorten(passes.map(passLine)), none: 'No pass this night.' },
      { title: 'Alerts that stand', lines: shorten(night.standingAlerts), none: 'None.' },
    ],
    button: { label: 'Open the night', address: pageAddress('/') },
    closing: `${night.organisation}, written at ${formatUtc(night.now.getTime(), 'second')}.`,
  })
}

const count = (number: number, one: string, many: string) => `${number} ${number === 1 ? one : many}`

function decisionLine(decision: DigestDecision): string {
  return `${formatUtc(decision.aos.getTime(), 'second')} ${decision.spacecraftName} at ${decision.stationName}, ${decision.linkName}: ${decision.state}, ${decision.verdict}, residual ${formatHz(decision.worstResidualHz)} Hz of ${formatHz(decision.allowanceHz)} Hz`
}

function passLine(pass: DigestPass): string {
  return `${formatUtc(pass.aos.getTime(), 'second')} to ${formatUtcTime(pass.los.getTime())} ${pass.spacecraftName} at ${pass.stationName}, ${count(pass.tables, 'table', 'tables')}`
}

function shorten(lines: readonly string[]): string[] {
  return lines.length <= longest ? [...lines] : [...lines.slice(0, longest), `and ${lines.length - longest} more on the page`]
}
