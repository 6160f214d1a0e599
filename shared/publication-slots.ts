import { DateTime } from 'luxon'

/** A station's evening publication: local time HH:MM in an IANA zone. */
export interface EveningRule { readonly zone: string, readonly publishAt: string }

const MINUTE_MS = 60_000

/**
 * The instant of an evening's publication on a local calendar day. A local time that daylight saving skips moves
 * forward by the gap; one that it repeats counts once, the first time.
 */
export function eveningInstant({ zone, publishAt }: EveningRule, year: number, month: number, day: number): number {
  const [hour, minute] = publishAt.split(':').map(Number) as [number, number]
  const local = DateTime.fromObject({ year, month, day, hour, minute }, { zone })
  if (!local.isValid) throw new RangeError(`There is no ${publishAt} in ${zone}: ${local.invalidExplanation ?? local.invalidReason}`)
  return Math.min(...local.getPossibleOffsets().map(possible => possible.toMillis()))
}

/** Every evening publication with fromMs ≤ instant < toMs, in order. Two local days that share an instant, as where a whole day is skipped, count once. */
export function eveningInstants(rule: EveningRule, fromMs: number, toMs: number): number[] {
  const instants: number[] = []
  const first = DateTime.fromMillis(fromMs, { zone: rule.zone }).startOf('day').minus({ days: 1 })
  for (let days = 0; ; days++) {
    const { year, month, day } = first.plus({ days })
    const instant = eveningInstant(rule, year, month, day)
    if (instant >= toMs) return instants
    if (instant >= fromMs && instant !== instants.at(-1)) instants.push(instant)
  }
}

/** The evening whose publication covers a pass: the last before its AOS. It covers all that rise before the next evening's. */
export function eveningBefore(rule: EveningRule, aosMs: number): number {
  const day = DateTime.fromMillis(aosMs, { zone: rule.zone }).startOf('day')
  for (let days = 0; ; days++) {
    const { year, month, day: date } = day.minus({ days })
    const instant = eveningInstant(rule, year, month, date)
    if (instant < aosMs) return instant
  }
}

/** A link's own times at a station; what is null is the station's. */
export interface OwnTimes { readonly publishAt: string | null, readonly leadMinutes: number | null }

/** The times that a link is published at: its own, and the station's where it has none. */
export function timesOf(station: EveningRule & { readonly publishLeadMinutes: number }, own: OwnTimes | null): EveningRule & { leadMinutes: number } {
  return { zone: station.zone, publishAt: own?.publishAt ?? station.publishAt, leadMinutes: own?.leadMinutes ?? station.publishLeadMinutes }
}

/**
 * When the schedule publishes a table that is approved by then: at its evening, or `leadMinutes` before AOS, whichever
 * comes first after `afterMs`; null when both have gone by and only a person can publish it.
 */
export function nextPublication(rule: EveningRule & { leadMinutes: number, aosMs: number, afterMs: number }): number | null {
  const due = [eveningBefore(rule, rule.aosMs), rule.aosMs - rule.leadMinutes * MINUTE_MS].filter(instant => instant > rule.afterMs)
  return due.length > 0 ? Math.min(...due) : null
}
