import type { ComparisonOut, PreviewOut } from '#shared/schemas/elements'
import { formatHz } from '#shared/utils/format'

const words: Record<string, string> = {
  'epoch-older': 'older than in use',
  'other-object': 'another object?',
  'along-track-jump': 'a jump: manoeuvre?',
  'decays': 'decays in the horizon',
  'bstar-negative': 'negative drag',
  'bstar-zero': 'no drag',
  'unusable': 'cannot be used',
}

/** A warning in a word or two, for a line of a list. */
export const warningWord = (code: string): string => words[code] ?? code

/** A first proposal for why a set is refused: what speaks most against it. */
export function refusalReason(comparison: ComparisonOut | null): string {
  const [warning] = comparison?.warnings ?? []
  return warning?.message.slice(0, 500) ?? ''
}

const some = (count: number, noun: string, plural = `${noun}s`) => `${count} ${count === 1 ? noun : plural}`

/** What a preview comes to, in one sentence. */
export function previewSentence({ asOf, published, drafts, looked }: PreviewOut): string {
  if (asOf === 'after') return published.length === 0 ? 'No published table was drafted anew because of this set.' : `${some(published.length, 'published table')} drafted anew because of this set.`
  const superseded = published.filter(table => table.supersedes).length
  const gone = published.filter(table => table.gone !== null).length
  const parts = [
    looked.published === 0 ? 'No table of this spacecraft is published' : `Of ${some(looked.published, 'published table')} ${superseded} would be drafted anew${gone > 0 ? ` and ${gone} would have no pass` : ''}`,
    looked.drafts === 0 ? 'none is in draft within 48 hours' : `of ${some(looked.drafts, 'draft')} within 48 hours ${drafts.length === 0 ? 'none changes its verdict' : drafts.length === 1 ? '1 changes its verdict' : `${drafts.length} change their verdict`}`,
  ]
  const passes = looked.passesGone + looked.passesNew > 0 ? ` ${some(looked.passesGone, 'pass', 'passes')} would go and ${looked.passesNew} come.` : ''
  return `${parts.join('; ')}.${passes}`
}

/** Hertz moved against what calls for a new revision. */
export const movesBy = ({ movesByHz, limitHz }: { movesByHz: number | null, limitHz: number | null }): string =>
  movesByHz === null || limitHz === null ? '–' : `${formatHz(movesByHz, 1)} of ${formatHz(limitHz, 1)}`
