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
  ] as const)('in %s at %s on %j', (zone, publishAt, [year, month, day], expected) => {
    expect(iso(eveningInstant({ zone, publishAt }, year, month, day))).toBe(expected)
  })

  it('counts each local day once over both edges of daylight saving', () => {
    const rule = { zone: 'Europe/Berlin', publishAt: '02:30' }
    expect(eveningInstants(rule, at('2026-03-28T00:00:00Z'), at('2026-03-31T00:00:00Z')).map(iso)).toEqual(['2026-03-28T01:30:00.000Z', '2026-03-29T01:30:00.000Z', '2026-03-30T00:30:00.000Z'])
    expect(eveningInstants(rule, at('2026-10-24T00:00:00Z'), at('2026-10-27T00:00:00Z')).map(iso)).toEqual(['2026-10-24T00:30:00.000Z', '2026-10-25T00:30:00.000Z', '2026-10-26T01:30:00.000Z'])
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
