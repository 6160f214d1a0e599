import { describe, expect, it } from 'vitest'
import { formatCountdown, formatDb, formatDeg, formatHz, formatLocalTime, formatSignedHz, formatUtc, formatUtcTime } from '#shared/utils/format'

const AT = Date.UTC(2026, 11, 1, 3, 12, 45, 123)
const S = 1000
const MIN = 60 * S
const H = 60 * MIN

describe('numbers on screens', () => {
  it('group hertz by thousands with narrow no-break spaces and a real minus sign', () => {
    expect(formatHz(437_512_340)).toBe('437\u202F512\u202F340')
    expect([formatHz(0), formatHz(999), formatHz(1000), formatHz(-10_203.84), formatHz(8_200_000_000)]).toEqual(['0', '999', '1\u202F000', '\u221210\u202F204', '8\u202F200\u202F000\u202F000'])
    expect(formatHz(1234.567, 2)).toBe('1\u202F234.57')
  })

  it('show a sign where asked, and none on zero', () => {
    expect([formatSignedHz(10_204), formatSignedHz(-412), formatSignedHz(0), formatSignedHz(-0.3), formatSignedHz(0.3), formatHz(-0)]).toEqual(['+10\u202F204', '\u2212412', '0', '0', '0', '0'])
    expect(formatSignedHz(-0.3, 1)).toBe('\u22120.3')
  })

  it('keep fixed decimals for decibels and degrees', () => {
    expect([formatDb(0.5), formatDb(-3.0103), formatDeg(64.25), formatDeg(-0.04), formatDeg(359.96)]).toEqual(['0.50', '\u22123.01', '64.3', '0.0', '360.0'])
  })

  it('show a dash for what is not known', () => {
    for (const nothing of [null, undefined, Number.NaN, Infinity]) {
      expect([formatHz(nothing), formatSignedHz(nothing), formatDb(nothing), formatDeg(nothing), formatUtc(nothing), formatUtcTime(nothing), formatCountdown(nothing), formatLocalTime(nothing, 'UTC')]).toEqual(Array.from({ length: 8 }, () => '–'))
    }
  })
})

describe('times on screens', () => {
  it('are ISO dates in UTC that say so, whatever the machine\'s zone', () => {
    expect(process.env.TZ).not.toBe('UTC')
    expect([formatUtc(AT), formatUtc(AT, 'second'), formatUtc(AT, 'minute')]).toEqual(['2026-12-01 03:12:45.123 UTC', '2026-12-01 03:12:45 UTC', '2026-12-01 03:12 UTC'])
    expect([formatUtcTime(AT), formatUtcTime(AT, 'millisecond', { label: false }), formatUtcTime(AT, 'minute')]).toEqual(['03:12:45 UTC', '03:12:45.123', '03:12 UTC'])
  })

  it('drop what is finer than the step, as a clock does', () => {
    expect([formatUtc(AT + 0.9), formatUtcTime(AT + 876), formatUtc(-0.5)]).toEqual(['2026-12-01 03:12:45.123 UTC', '03:12:45 UTC', '1969-12-31 23:59:59.999 UTC'])
  })

  it('count down and up without rounding up', () => {
    expect([12 * MIN + 59 * S, -38 * S, 119_999, 2 * MIN, 2 * H - 1, 2 * H, 26 * H + 5 * MIN, 49 * H, 400, -999, 0].map(formatCountdown)).toEqual([
      'in 12 min', '38 s ago', 'in 119 s', 'in 2 min', 'in 119 min', 'in 2 h 0 min', 'in 26 h 5 min', 'in 2 d 1 h', 'now', 'now', 'now',
    ])
  })

  it('stand in a chosen zone with its offset, in summer and winter', () => {
    // Source: the IANA zone database: Chatham is 13:45 ahead in December, 12:45 in July; New York 5 and 4 hours behind.
    const july = Date.UTC(2026, 6, 1, 3, 12)
    expect([formatLocalTime(AT, 'Pacific/Chatham'), formatLocalTime(july, 'Pacific/Chatham'), formatLocalTime(AT, 'America/New_York'), formatLocalTime(july, 'America/New_York')]).toEqual([
      '2026-12-01 16:57 (UTC+13:45)', '2026-07-01 15:57 (UTC+12:45)', '2026-11-30 22:12 (UTC\u221205:00)', '2026-06-30 23:12 (UTC\u221204:00)',
    ])
    expect(() => formatLocalTime(AT, 'Nowhere/Town')).toThrow(/Nowhere\/Town.*such as/)
  })
})
