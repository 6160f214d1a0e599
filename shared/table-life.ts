/**
 * The life of a tuning table's revision: who or what moves each state, what the station sees, and what happens
 * when nobody acts. The server moves states by this table only; the pages offer what it allows.
 */

import type { Verdict } from './physics/types'

export const revisionStates = ['drafted', 'approved', 'held', 'published', 'collected', 'superseded', 'withdrawn', 'lapsed'] as const
export type RevisionState = typeof revisionStates[number]

export type Move = 'approve' | 'hold' | 'stand-down' | 'release' | 'publish' | 'collect' | 'supersede' | 'withdraw' | 'lapse' | 'return-to-draft'
export type Mover = 'person' | 'rule' | 'schedule' | 'station' | 'server'

export interface MoveRule {
  readonly from: readonly RevisionState[]
  readonly to: RevisionState
  readonly by: readonly Mover[]
  readonly needsReason: boolean
  /** What the station's controller gets from then on. */
  readonly stationSees: string
}

export const moves: Record<Move, MoveRule> = {
  'approve': { from: ['drafted'], to: 'approved', by: ['person', 'rule'], needsReason: false, stationSees: 'nothing new' },
  'hold': { from: ['drafted', 'approved'], to: 'held', by: ['person'], needsReason: true, stationSees: 'nothing new; a published revision stays' },
  // For another pass that has the antenna; given back, the table is what it was.
  'stand-down': { from: ['drafted', 'approved'], to: 'held', by: ['person', 'schedule'], needsReason: true, stationSees: 'nothing new' },
  'release': { from: ['held'], to: 'drafted', by: ['person'], needsReason: false, stationSees: 'nothing new' },
  'return-to-draft': { from: ['approved'], to: 'drafted', by: ['server'], needsReason: true, stationSees: 'nothing new' },
  'publish': { from: ['approved'], to: 'published', by: ['person', 'schedule'], needsReason: false, stationSees: 'this revision' },
  'collect': { from: ['published'], to: 'collected', by: ['station'], needsReason: false, stationSees: 'this revision' },
  'supersede': { from: ['published', 'collected'], to: 'superseded', by: ['server'], needsReason: true, stationSees: 'the newer revision' },
  'withdraw': { from: ['published', 'collected'], to: 'withdrawn', by: ['person'], needsReason: true, stationSees: 'gone, and listed as withdrawn' },
  'lapse': { from: ['drafted', 'approved', 'held'], to: 'lapsed', by: ['schedule', 'server'], needsReason: false, stationSees: 'what it had before' },
}

/** Not yet out: recomputed in place when what it depends on changes. */
export const openStates: readonly RevisionState[] = ['drafted', 'approved', 'held']
/** What the station gets. */
export const outStates: readonly RevisionState[] = ['published', 'collected']

export const stateMeanings: Record<RevisionState, string> = {
  drafted: 'Waits for a decision.',
  approved: 'Goes out at its slot, or when somebody publishes it.',
  held: 'Kept back until it is released.',
  published: 'With the station’s feed; not fetched yet.',
  collected: 'The station’s controller has this revision.',
  superseded: 'A newer revision took its place.',
  withdrawn: 'Taken back; the station is told that it is gone.',
  lapsed: 'Not published when the pass began.',
}

export function canMove(state: RevisionState, move: Move, by: Mover): boolean {
  const rule = moves[move]
  return rule.from.includes(state) && rule.by.includes(by)
}

/** Minutes before AOS at which an undecided table calls for a decision, and then calls on-call. */
export const decisionDueMinutes = 60
export const decisionCallMinutes = 15
/** Minutes before AOS at which a published table that nobody fetched raises an alert. */
export const collectionDueMinutes = 10

/** A change that matters: budgeted residual of the published rows moved by more than this part of the allowance. */
export const supersedeShare = 0.2

const rank: Record<Verdict, number> = { holds: 0, tight: 1, breaks: 2 }

/** Approval stays on recomputation unless the verdict worsens; a hold stays. */
export function stateAfterRecomputation(state: 'drafted' | 'approved' | 'held', before: Verdict, after: Verdict): 'drafted' | 'approved' | 'held' {
  return state === 'approved' && rank[after] > rank[before] ? 'drafted' : state
}

/** The link's rule "approve what holds". */
export function approvedByRule(rule: boolean, verdict: Verdict): boolean {
  return rule && verdict === 'holds'
}

/** A published table is drafted anew only when its rows' budgeted residual or their verdict moved enough. */
export function needsNewRevision(published: { worstResidualHz: number, verdict: Verdict }, recheck: { worstResidualHz: number, allowanceHz: number, verdict: Verdict }): boolean {
  return recheck.verdict !== published.verdict
    || Math.abs(recheck.worstResidualHz - published.worstResidualHz) > supersedeShare * recheck.allowanceHz
}

/** A table that breaks goes out only with a second person behind it. */
export function needsSecondPerson(verdict: Verdict): boolean {
  return verdict === 'breaks'
}
