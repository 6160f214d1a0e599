import ical, { ICalCalendarMethod, ICalEventStatus, ICalEventTransparency } from 'ical-generator'

export interface CalendarPass {
  /** Stays with the pass when elements move it. */
  readonly id: string
  /** Counts up whenever a time that the calendar shows has changed, or the pass has gone or come back. */
  readonly sequence: number
  readonly spacecraftName: string
  readonly stationName: string
  readonly aos: Date
  readonly culmination: Date
  readonly los: Date
  readonly maxElevationDeg: number
  /** No longer predicted. */
  readonly gone: boolean
  /** Its page, for those who may see it. */
  readonly url?: string
}

const refreshS = 15 * 60

/** Section 3.3.11: the package writes a calendar's own name as it is given. */
const escapeText = (text: string) => text.replace(/[\\;,]/g, '\\$&')

/**
 * Passes as a calendar (RFC 5545, published as RFC 5546 section 3.2.1 has it): one event a pass from AOS to LOS in UTC, to the second
 * before; a pass that has gone stays with status CANCELLED. `stamp` is the instant of this very calendar.
 */
export function passCalendar({ name, passes, stamp }: { name: string, passes: readonly CalendarPass[], stamp: Date }): string {
  const calendar = ical({ prodId: { company: 'Nullbeat', product: 'Passes', language: 'EN' }, name: escapeText(name), method: ICalCalendarMethod.PUBLISH, ttl: refreshS })
  for (const pass of passes) {
    calendar.createEvent({
      id: pass.id,
      sequence: pass.sequence,
      stamp,
      start: pass.aos,
      // An event ends after it begins, to the second too.
      end: new Date(Math.max(pass.los.getTime(), pass.aos.getTime() + 1000)),
      summary: `${pass.spacecraftName} at ${pass.stationName}, ${Math.round(pass.maxElevationDeg)}°`,
      description: `Culmination ${pass.culmination.toISOString().slice(11, 19)} UTC at ${pass.maxElevationDeg.toFixed(1)}°. Predicted AOS ${pass.aos.toISOString()}, LOS ${pass.los.toISOString()}.${pass.gone ? ' No longer predicted.' : ''}`,
      location: pass.stationName,
      status: pass.gone ? ICalEventStatus.CANCELLED : ICalEventStatus.CONFIRMED,
      // A pass takes nobody's time by itself.
      transparency: ICalEventTransparency.TRANSPARENT,
      ...(pass.url ? { url: pass.url } : {}),
    })
  }
  return `${calendar.toString()}\r\n`
}
