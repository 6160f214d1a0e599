import { describe, expect, it } from 'vitest'
import { createQuietSpanBody } from '../../../shared/schemas/quiet-spans'
import { readUtcText, utcText } from '../../../app/utils/utc-text'

describe('an instant as people type it', () => {
  it.each([
    ['2026-12-01 03:10', '2026-12-01T03:10Z'],
    [' 2026-12-01T03:10:45Z ', '2026-12-01T03:10:45Z'],
    ['2026-12-01 03:10 UTC', '2026-12-01T03:10Z'],
    ['tomorrow', 'tomorrow'],
    ['2026-12-01', '2026-12-01'],
  ])('%j is %j', (typed, expected) => {
    expect(readUtcText(typed)).toBe(expected)
  })

  it('is shown as it is typed', () => {
    expect(utcText(Date.UTC(2026, 11, 1, 3, 10, 59))).toBe('2026-12-01 03:10')
  })
})

describe('a quiet span as it is entered', () => {
  const body = { stationId: '00000000-0000-4000-8000-000000000001', startsAt: '2026-12-01T03:10Z', endsAt: '2026-12-01T03:20Z', reason: 'Ranging' }
  const paths = (given: object) => createQuietSpanBody.safeParse({ ...body, ...given }).error?.issues.map(issue => issue.path.join('.')) ?? []
  it('names something, ends after it begins, and has a reason', () => {
    expect(paths({})).toEqual([])
    expect(paths({ stationId: undefined })).toEqual(['stationId'])
    expect(paths({ endsAt: '2026-12-01T03:10Z' })).toEqual(['endsAt'])
    expect(paths({ startsAt: '2026-12-01 03:10' })).toContain('startsAt')
    expect(paths({ reason: '' })).toEqual(['reason'])
  })
})
