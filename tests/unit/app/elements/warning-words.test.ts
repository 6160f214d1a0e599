import { describe, expect, it } from 'vitest'
import type { ComparisonOut, PreviewOut } from '../../../../shared/schemas/elements'
import { movesBy, previewSentence, refusalReason, warningWord } from '../../../../app/utils/elements/warning-words'

const table = { tableId: 't', passId: 'p', stationName: 'Holm', linkName: 'Telemetry', aos: '2026-12-01T00:00:00.000Z', revision: 1, verdictBefore: 'holds', verdictAfter: 'tight', gone: null } as const
const published = { ...table, supersedes: true, movesByHz: 412.34, limitHz: 357.1, reason: null }
const draft = { ...table, state: 'approved', returnsToDraft: true }
const preview = (change: Partial<PreviewOut>): PreviewOut => ({ setId: 's', asOf: 'before', published: [], drafts: [], looked: { published: 0, drafts: 0, passesGone: 0, passesNew: 0 }, ...change })

// Words only; what they say is by the life of a table.
describe('what a preview comes to', () => {
  it('is said where nothing is published or in draft', () => {
    expect(previewSentence(preview({}))).toBe('No table of this spacecraft is published; none is in draft within 48 hours.')
  })

  it('counts what would be drafted anew, what would have no pass, and verdicts that change', () => {
    expect(previewSentence(preview({ published: [published, { ...published, supersedes: false }, { ...published, supersedes: false, gone: 'Gone.' }], drafts: [draft], looked: { published: 3, drafts: 8, passesGone: 1, passesNew: 2 } })))
      .toBe('Of 3 published tables 1 would be drafted anew and 1 would have no pass; of 8 drafts within 48 hours 1 changes its verdict. 1 pass would go and 2 come.')
    expect(previewSentence(preview({ drafts: [draft, draft], looked: { published: 1, drafts: 2, passesGone: 0, passesNew: 0 } })))
      .toBe('Of 1 published table 0 would be drafted anew; of 2 drafts within 48 hours 2 change their verdict.')
  })

  it('says afterwards what was drafted anew', () => {
    expect(previewSentence(preview({ asOf: 'after' }))).toBe('No published table was drafted anew because of this set.')
    expect(previewSentence(preview({ asOf: 'after', published: [published] }))).toBe('1 published table drafted anew because of this set.')
  })

  it('gives the hertz moved beside what calls for a new revision', () => {
    expect(movesBy(published)).toBe('412.3 of 357.1')
    expect(movesBy({ movesByHz: null, limitHz: null })).toBe('–')
  })
})

describe('a proposed reason', () => {
  it('is what speaks most against the set, and nothing where nothing does', () => {
    const warnings = [{ code: 'epoch-older', message: 'Its epoch is 3.0 h older than that of the set in use.', action: 'Refuse it.' }]
    expect(refusalReason({ warnings } as ComparisonOut)).toBe('Its epoch is 3.0 h older than that of the set in use.')
    expect(refusalReason({ warnings: [] as ComparisonOut['warnings'] } as ComparisonOut)).toBe('')
    expect(refusalReason(null)).toBe('')
    expect(warningWord('epoch-older')).toBe('older than in use')
  })
})
