import type { Move, RevisionState } from '#shared/table-life'
import { canMove, stateMeanings } from '#shared/table-life'
import { DomainError } from '../errors'
import type { LockedTable, RevisionRow } from './lock-table'

const verbs: Partial<Record<Move, string>> = { approve: 'approved', hold: 'held', release: 'released', publish: 'published', withdraw: 'withdrawn' }
const hints: Partial<Record<`${Move}/${RevisionState}`, string>> = {
  'approve/held': 'Release it first.',
  'publish/held': 'Release and approve it first.',
  'publish/drafted': 'Approve it first.',
  'release/drafted': 'It is not held.',
  'release/approved': 'It is not held.',
}

/** The open revision that a person decides on; 409 says why there is none or why it is another than the person saw. */
export function requireOpen(table: LockedTable, move: Move, now: Date, revision: number | undefined): RevisionRow {
  requireSeen(table, revision)
  if (!table.open) {
    const hint = move === 'hold' && table.out ? ' Withdraw it instead.' : ''
    throw new DomainError('conflict', `Revision ${table.newest.number} is ${table.newest.state}: nothing of this table waits to be ${verbs[move]}.${hint}`)
  }
  if (table.pass.aos <= now) throw new DomainError('conflict', `The pass began at ${table.pass.aos.toISOString()}: nothing can be ${verbs[move]} any more.`)
  return table.open
}

export function requireMove(revision: RevisionRow, move: Move): void {
  if (canMove(revision.state, move, 'person')) return
  const hint = hints[`${move}/${revision.state}`] ?? stateMeanings[revision.state]
  throw new DomainError('conflict', `Revision ${revision.number} is ${revision.state} and cannot be ${verbs[move]}. ${hint}`)
}

/** Nobody decides on rows that have changed since they were read. */
function requireSeen(table: LockedTable, revision: number | undefined): void {
  if (revision !== undefined && revision !== table.newest.number) {
    throw new DomainError('conflict', `Revision ${table.newest.number} has taken the place of revision ${revision}: look at it and decide again.`)
  }
}
