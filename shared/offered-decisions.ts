import type { Role } from './permissions'
import { may } from './permissions'
import type { RevisionState } from './table-life'
import { canMove, needsSecondPerson } from './table-life'
import type { Verdict } from './physics/types'

export interface DecidedTable {
  state: RevisionState
  verdict: Verdict
  aos: string
  approvedById: string | null
  secondedBy: string | null
}

export interface Offered { approve: boolean, second: boolean, hold: boolean, release: boolean, publish: boolean, withdraw: boolean }

/** What a person can do with a table now; the server decides by the same life and the same permissions. */
export function offeredDecisions(table: DecidedTable, person: { id: string, roles: readonly Role[] } | null, nowMs: number): Offered {
  const decides = person !== null && may(person.roles, 'tables:decide')
  const ahead = Date.parse(table.aos) > nowMs
  const waitsForSecond = table.state === 'approved' && needsSecondPerson(table.verdict) && table.secondedBy === null
  return {
    approve: decides && ahead && canMove(table.state, 'approve', 'person'),
    second: ahead && waitsForSecond && person !== null && may(person.roles, 'tables:second') && person.id !== table.approvedById,
    hold: decides && ahead && canMove(table.state, 'hold', 'person'),
    release: decides && ahead && canMove(table.state, 'release', 'person'),
    publish: decides && ahead && canMove(table.state, 'publish', 'person') && !waitsForSecond,
    withdraw: decides && canMove(table.state, 'withdraw', 'person'),
  }
}

/** Waits for a person: undecided, or breaking and not yet seconded. */
export function needsDecision(table: DecidedTable, nowMs: number): boolean {
  if (Date.parse(table.aos) <= nowMs) return false
  return table.state === 'drafted' || (table.state === 'approved' && needsSecondPerson(table.verdict) && table.secondedBy === null)
}
