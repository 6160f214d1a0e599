import { describe, expect, it } from 'vitest'
import type { CalendarPass } from '#shared/formats/pass-calendar'
import { passCalendar } from '#shared/formats/pass-calendar'
import { readIcs } from './ics-reader'

// RFC 5545, by a reader of the test's own; publishing: RFC 5546, section 3.2.1.
const stamp = new Date('2026-11-30T12:00:00.750Z')
const pass = (given: Partial<CalendarPass> = {}): CalendarPass => ({
  id: 'b1f3c2d4-0000-4000-8000-000000000001', sequence: 3, spacecraftName: 'Petrel A', stationName: 'North Cove', aos: new Date('2026-12-01T03:12:45.123Z'), culmination: new Date('2026-12-01T03:17:00.999Z'),
  los: new Date('2026-12-01T03:22:10.999Z'), maxElevationDeg: 41.26, gone: false, ...given,
})
const read = (passes: CalendarPass[], name = 'Passes') => readIcs(new TextEncoder().encode(passCalendar({ name, passes, stamp })))

describe('passes as a calendar', () => {
  it('are events from AOS to LOS in UTC, with the pass’s own id', () => {
    expect(read([pass({ url: 'https://ops.example/passes/1' })])).toEqual({ method: 'PUBLISH', name: 'Passes', events: [{
      uid: 'b1f3c2d4-0000-4000-8000-000000000001', sequence: 3, stampedAt: Date.parse('2026-11-30T12:00:00.000Z'), startsAt: Date.parse('2026-12-01T03:12:45.000Z'), endsAt: Date.parse('2026-12-01T03:22:10.000Z'),
      summary: 'Petrel A at North Cove, 41°', description: 'Culmination 03:17:00 UTC at 41.3°. Predicted AOS 2026-12-01T03:12:45.123Z, LOS 2026-12-01T03:22:10.999Z.',
      location: 'North Cove', status: 'CONFIRMED', transparency: 'TRANSPARENT', url: 'https://ops.example/passes/1',
    }] })
  })

  it('say of a pass that has gone that it is cancelled', () => {
    expect(read([pass({ gone: true, sequence: 4 })]).events[0]).toMatchObject({ status: 'CANCELLED', sequence: 4, description: expect.stringMatching(/No longer predicted\.$/) })
  })

  it('keep every name as it is, whatever signs and letters it holds, in lines of 75 octets', () => {
    for (const name of ['a;b,c\\d:e"f', `${'é'.repeat(80)}, ${'衛'.repeat(80)}`, `${'x'.repeat(60)}😀😀😀😀😀`, 'BEGIN:VEVENT', '\\n\\N\\;', '  blanks  ']) {
      expect(read([pass({ stationName: name })], name)).toMatchObject({ name, events: [{ location: name, summary: `Petrel A at ${name}, 41°` }] })
    }
  })

  it('end after they begin, however short they are', () => {
    const { events: [event] } = read([pass({ aos: new Date('2026-12-01T03:12:45.900Z'), culmination: new Date('2026-12-01T03:12:45.950Z'), los: new Date('2026-12-01T03:12:45.990Z') })])
    expect(event!.endsAt - event!.startsAt).toBe(1000)
  })

  it('are a calendar without passes too', () => {
    expect(read([]).events).toEqual([])
  })
})

describe('the reader that judges', () => {
  it('refuses what RFC 5545 forbids', () => {
    const text = passCalendar({ name: 'Passes', passes: [pass()], stamp })
    const wrong: [string, string, RegExp][] = [
      ['bare line feeds', text.replaceAll('\r\n', '\n'), /CR LF/], ['a long line', text.replace('LOCATION:', `X-LONG:${'x'.repeat(80)}\r\nLOCATION:`), /octets/], ['no DTSTAMP', text.replace(/DTSTAMP.*\r\n/, ''), /no DTSTAMP/],
      ['a time without zone', text.replace(/(DTSTART:\d+T\d+)Z/, '$1'), /no UTC/], ['a comma that is not escaped', text.replace('\\, 41', ', 41'), /escaped/], ['an end before the start', text.replace(/DTEND:\d{8}/, 'DTEND:20251201'), /before it begins/],
      ['a status of another component', text.replace('CONFIRMED', 'COMPLETED'), /may not be/], ['no end', text.replace('END:VEVENT\r\n', ''), /ends as/], ['no last line end', text.trimEnd(), /no end/],
    ]
    for (const [what, broken, message] of wrong) {
      expect(broken, what).not.toBe(text)
      expect(() => readIcs(new TextEncoder().encode(broken)), what).toThrow(message)
    }
  })
})
