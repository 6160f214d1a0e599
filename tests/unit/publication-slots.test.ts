import { describe, expect, it } from 'vitest'
import { eveningBefore, eveningInstant, eveningInstants, nextPublication } from '#shared/publication-slots'

const iso = (ms: number | null) => ms === null ? null : new Date(ms).toISOString()
const at = (text: string) => Date.parse(text)

// Source of the zones' rules: the IANA time zone database; the expected instants are worked out by hand from its offsets.
describe('when the schedule publishes', () => {
  it.each([
    ['Europe/Berlin', '18:00', [2026, 12, 1], '2026-12-01T17:00:00.000Z'],
    ['Asia/Kolkata', '18:00', [2026, 12, 1], '2026-12-01T12:30:00.000Z'],
    // Skipped: 02:00 to 03:00 on 29 March; 02:30 moves forward by the gap to 03:30 summer time.
    ['Europe/Berlin', '02:30', [2026, 3, 29], '2026-03-29T01:30:00.000Z'],
    // Repeated: 02:30 on 25 October counts the first time, still in summer time.
    ['Europe/Berlin', '02:30', [2026, 10, 25], '2026-10-25T00:30:00.000Z'],
    ['America/New_York', '01:30', [2026, 11, 1], '2026-11-01T05:30:00.000Z'],
    // Half an hour of difference: 01:30 to 02:00 is repeated on 5 April, 02:00 to 02:30 skipped on 4 October.
    ['Australia/Lord_Howe', '01:45', [2026, 4, 5], '2026-04-04T14:45:00.000Z'],
    ['Australia/Lord_Howe', '02:10', [2026, 10, 4], '2026-10-03T15:40:00.000Z'],
    ['Pacific/Chatham', '18:00', [2028, 2, 29], '2028-02-29T04:15:00.000Z'],
    // Two hours of difference: 01:00 to 03:00 UTC+0 is skipped on 29 March (02:30 goes to 04:30 of UTC+2); 01:00 to 03:00 is repeated on 25 October.
    ['Antarctica/Troll', '01:30', [2026, 3, 29], '2026-03-29T01:30:00.000Z'],
    ['Antarctica/Troll', '02:00', [2026, 10, 25], '2026-10-25T00:00:00.000Z'],
    // The gap lies at midnight: 00:00 to 01:00 on 24 April (from UTC+2) and on 6 September (from UTC-4).
    ['Africa/Cairo', '00:30', [2026, 4, 24], '2026-04-23T22:30:00.000Z'],
    ['America/Santiago', '00:00', [2026, 9, 6], '2026-09-06T04:00:00.000Z'],
    // Half hours in the offset itself: summer UTC-2:30, winter UTC-3:30.
    ['America/St_Johns', '02:15', [2026, 3, 8], '2026-03-08T05:45:00.000Z'],
    ['America/St_Johns', '01:15', [2026, 11, 1], '2026-11-01T03:45:00.000Z'],
    // The southern hemisphere goes the other way round: 02:00 to 03:00 is skipped on 27 September, repeated on 5 April.
    ['Pacific/Auckland', '02:30', [2026, 9, 27], '2026-09-26T14:30:00.000Z'],
    ['Pacific/Auckland', '02:30', [2026, 4, 5], '2026-04-04T13:30:00.000Z'],
  ] as const)('in %s at %s on %j', (zone, publishAt, [year, month, day], expected) => {
    expect(iso(eveningInstant({ zone, publishAt }, year, month, day))).toBe(expected)
  })

  it('counts each local day once over both edges of daylight saving', () => {
    const rule = { zone: 'Europe/Berlin', publishAt: '02:30' }
    expect(eveningInstants(rule, at('2026-03-28T00:00:00Z'), at('2026-03-31T00:00:00Z')).map(iso)).toEqual(['2026-03-28T01:30:00.000Z', '2026-03-29T01:30:00.000Z', '2026-03-30T00:30:00.000Z'])
    expect(eveningInstants(rule, at('2026-10-24T00:00:00Z'), at('2026-10-27T00:00:00Z')).map(iso)).toEqual(['2026-10-24T00:30:00.000Z', '2026-10-25T00:30:00.000Z', '2026-10-26T01:30:00.000Z'])
  })

  // Intl reads the same zone database by another road than the product's; a year has as many evenings as days.
  it.each(['Europe/Oslo', 'America/St_Johns', 'Australia/Lord_Howe', 'Antarctica/Troll', 'Asia/Kathmandu', 'Pacific/Chatham'])('in %s comes on every day of the leap year 2028 once, at its local time', (zone) => {
    const instants = eveningInstants({ zone, publishAt: '17:30' }, at('2028-01-01T12:00:00Z'), at('2029-01-01T12:00:00Z'))
    const local = new Intl.DateTimeFormat('sv-SE', { timeZone: zone, dateStyle: 'short', timeStyle: 'short' })
    const shown = instants.map(ms => local.format(ms))
    expect(shown.every(text => text.endsWith(' 17:30'))).toBe(true)
    expect(new Set(shown).size).toBe(366)
    expect(shown).toHaveLength(366)
  })

  it('is not owed twice where a whole day was skipped: Samoa went from 29 to 31 December 2011', () => {
    const rule = { zone: 'Pacific/Apia', publishAt: '18:00' }
    expect(eveningInstants(rule, at('2011-12-29T00:00:00Z'), at('2012-01-01T12:00:00Z')).map(iso)).toEqual(['2011-12-29T04:00:00.000Z', '2011-12-30T04:00:00.000Z', '2011-12-31T04:00:00.000Z', '2012-01-01T04:00:00.000Z'])
  })

  it('takes the bounds as from, including, to, excluding', () => {
    const rule = { zone: 'UTC', publishAt: '18:00' }
    expect(eveningInstants(rule, at('2026-12-01T18:00:00Z'), at('2026-12-02T18:00:00Z')).map(iso)).toEqual(['2026-12-01T18:00:00.000Z'])
  })

  const rule = { zone: 'Europe/Berlin', publishAt: '18:00', leadMinutes: 60 }
  it.each([
    ['a pass in the night, seen in the afternoon: that evening', '2026-12-02T01:00:00Z', '2026-12-01T12:00:00Z', '2026-12-01T17:00:00.000Z'],
    ['the same, seen after that evening: an hour before AOS', '2026-12-02T01:00:00Z', '2026-12-01T17:00:00Z', '2026-12-02T00:00:00.000Z'],
    ['a pass at noon belongs to the evening before', '2026-12-02T11:00:00Z', '2026-12-01T12:00:00Z', '2026-12-01T17:00:00.000Z'],
    ['a pass days ahead waits for its own evening', '2026-12-05T01:00:00Z', '2026-12-01T12:00:00Z', '2026-12-04T17:00:00.000Z'],
    ['a pass half an hour after the evening: an hour before AOS comes first', '2026-12-01T17:30:00Z', '2026-12-01T12:00:00Z', '2026-12-01T16:30:00.000Z'],
    ['both gone by: only a person', '2026-12-02T01:00:00Z', '2026-12-02T00:30:00Z', null],
  ])('%s', (_what, aos, after, expected) => {
    expect(iso(nextPublication({ ...rule, aosMs: at(aos), afterMs: at(after) }))).toBe(expected)
  })

  it('a pass that rises at the very evening belongs to the evening before', () => {
    expect(iso(eveningBefore(rule, at('2026-12-01T17:00:00Z')))).toBe('2026-11-30T17:00:00.000Z')
  })
})
