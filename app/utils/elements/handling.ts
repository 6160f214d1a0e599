export const handlings = ['open', 'kept', 'dropped'] as const
/** Where a set of no spacecraft stands: to be decided on, kept on purpose, dropped. */
export type Handling = typeof handlings[number]

export const pileNames: Record<Handling, string> = { open: 'To decide', kept: 'Kept', dropped: 'Dropped' }

/** What was just done, in words. */
export function wordsOf(to: Handling, count: number): string {
  const sets = count === 1 ? 'One set is' : `${count.toLocaleString('en-GB').replaceAll(',', ' ')} sets are`
  if (count === 0) return 'Nothing was there to change.'
  if (to === 'kept') return `${sets} kept.`
  return to === 'dropped' ? `${sets} dropped; they can be put back from the pile Dropped.` : `${sets} put back to be decided on.`
}
