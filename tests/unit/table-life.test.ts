import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { Move, Mover, RevisionState } from '#shared/table-life'
import { approvedByRule, canMove, moves, needsNewRevision, needsSecondPerson, openStates, outStates, revisionStates, stateAfterRecomputation } from '#shared/table-life'

type Verdict = 'holds' | 'tight' | 'breaks'
const verdicts = ['holds', 'tight', 'breaks'] as const
const allMoves = Object.keys(moves) as Move[]
const movers: Mover[] = ['person', 'rule', 'schedule', 'station', 'server']

// Source: the table in the product's description of a table's life, copied by hand: from, move, to, by whom.
const life: [RevisionState, Move, RevisionState, Mover[]][] = [
  ['drafted', 'approve', 'approved', ['person', 'rule']],
  ['drafted', 'hold', 'held', ['person']],
  ['approved', 'hold', 'held', ['person']],
  // Of two passes that want one antenna: the operator decides, by default the schedule does.
  ['drafted', 'stand-down', 'held', ['person', 'schedule']],
  ['approved', 'stand-down', 'held', ['person', 'schedule']],
  ['held', 'release', 'drafted', ['person']],
  ['approved', 'return-to-draft', 'drafted', ['server']],
  ['approved', 'publish', 'published', ['person', 'schedule']],
  ['published', 'collect', 'collected', ['station']],
  ['published', 'supersede', 'superseded', ['server']],
  ['collected', 'supersede', 'superseded', ['server']],
  ['published', 'withdraw', 'withdrawn', ['person']],
  ['collected', 'withdraw', 'withdrawn', ['person']],
  ['drafted', 'lapse', 'lapsed', ['schedule', 'server']],
  ['approved', 'lapse', 'lapsed', ['schedule', 'server']],
  ['held', 'lapse', 'lapsed', ['schedule', 'server']],
]

describe('the life of a table', () => {
  it('allows exactly the steps of the description, by those whom it names', () => {
    for (const state of revisionStates) {
      for (const move of allMoves) {
        for (const mover of movers) {
          const row = life.find(([from, name, , by]) => from === state && name === move && by.includes(mover))
          expect(canMove(state, move, mover), `${state} ${move} ${mover}`).toBe(row !== undefined)
          if (row) expect(moves[move].to).toBe(row[2])
        }
      }
    }
  })

  it('asks for a reason where a person keeps something back or takes it away', () => {
    expect(allMoves.filter(move => moves[move].needsReason).sort()).toEqual(['hold', 'return-to-draft', 'stand-down', 'supersede', 'withdraw'])
  })

  it.each([
    ['drafted', 'holds', 'breaks', 'drafted'], ['approved', 'holds', 'holds', 'approved'], ['approved', 'tight', 'holds', 'approved'], ['approved', 'holds', 'tight', 'drafted'],
    ['approved', 'tight', 'breaks', 'drafted'], ['approved', 'breaks', 'breaks', 'approved'], ['held', 'holds', 'breaks', 'held'],
  ] as const)('%s and %s, recomputed to %s, is %s', (state, before, after, expected) => {
    expect(stateAfterRecomputation(state, before, after)).toBe(expected)
  })

  it('drafts a published table anew past a fifth of the allowance either way, or when its verdict changes', () => {
    const published = { worstResidualHz: 500, verdict: 'holds' as const }
    const recheck = (worstResidualHz: number, verdict: Verdict = 'holds') => needsNewRevision(published, { worstResidualHz, allowanceHz: 1000, verdict })
    expect([recheck(700), recheck(701), recheck(300), recheck(299), recheck(500, 'tight')]).toEqual([false, true, false, true, true])
  })

  it('never breaks its promises, in whatever order things happen', () => {
    const step = fc.record({ move: fc.constantFrom(...allMoves, 'recompute' as const), mover: fc.constantFrom(...movers), person: fc.constantFrom('Ada', 'Bo'), verdict: fc.constantFrom(...verdicts), rule: fc.boolean() })
    fc.assert(fc.property(fc.array(step, { maxLength: 60 }), (steps) => {
      const table = new TableUnderTest()
      for (const one of steps) {
        const before = table.revisions.map(revision => ({ ...revision }))
        table.take(one)
        expect(table.revisions.filter(({ state }) => openStates.includes(state)).length).toBeLessThanOrEqual(1)
        expect(table.revisions.filter(({ state }) => outStates.includes(state)).length).toBeLessThanOrEqual(1)
        table.revisions.forEach((revision, i) => {
          const past = before[i]
          if (past && ['superseded', 'withdrawn', 'lapsed'].includes(past.state)) expect(revision).toEqual(past)
          if (past && outStates.includes(past.state)) expect(revision.verdict).toBe(past.verdict)
          if (outStates.includes(revision.state) && revision.verdict === 'breaks') expect(new Set(revision.approvedBy).size).toBe(2)
          if (revision.state === 'approved' && revision.approvedBy.includes('rule')) expect(revision.verdict).toBe('holds')
          // The station sees a change only by a publication or a withdrawal.
          if (past && outStates.includes(past.state) !== outStates.includes(revision.state)) expect(['publish', 'withdraw']).toContain(one.move)
        })
      }
    }), { numRuns: 500 })
  })
})

interface Revision { state: RevisionState, verdict: Verdict, approvedBy: string[] }
interface Step { move: Move | 'recompute', mover: Mover, person: string, verdict: Verdict, rule: boolean }

/** A table moved by shared/table-life.ts alone, as the server moves it. */
class TableUnderTest {
  revisions: Revision[] = [{ state: 'drafted', verdict: 'holds', approvedBy: [] }]

  take({ move, mover, person, verdict, rule }: Step): void {
    const open = this.revisions.find(({ state }) => openStates.includes(state))
    const out = this.revisions.find(({ state }) => outStates.includes(state))
    if (move === 'recompute') return open ? this.recompute(open, verdict, rule) : this.draft(out, verdict, rule)
    if (move === 'supersede') return
    const revision = move === 'collect' || move === 'withdraw' ? out : open
    if (!revision) return
    if (move === 'approve' && revision.state === 'approved' && needsSecondPerson(revision.verdict) && !revision.approvedBy.includes(person)) revision.approvedBy.push(person)
    if (!canMove(revision.state, move, mover)) return
    if (move === 'approve' && mover === 'rule' && !approvedByRule(rule, revision.verdict)) return
    if (move === 'publish' && needsSecondPerson(revision.verdict) && revision.approvedBy.length < 2) return
    if (move === 'publish' && out && canMove(out.state, 'supersede', 'server')) out.state = moves.supersede.to
    if (move === 'approve') revision.approvedBy = [mover === 'rule' ? 'rule' : person]
    if (move === 'hold' || move === 'stand-down' || move === 'return-to-draft') revision.approvedBy = []
    revision.state = moves[move].to
  }

  private recompute(open: Revision, verdict: Verdict, rule: boolean): void {
    const state = stateAfterRecomputation(open.state as 'drafted' | 'approved' | 'held', open.verdict, verdict)
    if (state !== open.state) open.approvedBy = []
    Object.assign(open, { state, verdict })
    if (state === 'drafted' && approvedByRule(rule, verdict)) Object.assign(open, { state: 'approved', approvedBy: ['rule'] })
  }

  private draft(out: Revision | undefined, verdict: Verdict, rule: boolean): void {
    const isCarried = out !== undefined && stateAfterRecomputation('approved', out.verdict, verdict) === 'approved'
    const isByRule = !isCarried && approvedByRule(rule, verdict)
    this.revisions.push({ state: isCarried || isByRule ? 'approved' : 'drafted', verdict, approvedBy: isCarried ? [...out.approvedBy] : isByRule ? ['rule'] : [] })
  }
}
