import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { useTestDatabase } from '../../support/domain-test'
import type { Revision, Step } from './life-support'
import { allowanceHz, freezeMinutes, makeWorld, verdictOf } from './life-support'

const database = useTestDatabase()
const start = new Date('2026-12-01T12:00:00.000Z')

const residual = fc.integer({ min: 100, max: 1300 })
const person = fc.constantFrom('Ada' as const, 'Bo' as const, 'Cleo' as const)
const step: fc.Arbitrary<Step> = fc.oneof(
  { weight: 3, arbitrary: fc.record({ kind: fc.constantFrom('approve' as const), person }) },
  { weight: 3, arbitrary: fc.record({ kind: fc.constantFrom('publish' as const), person }) },
  { weight: 4, arbitrary: fc.record({ kind: fc.constantFrom('predict' as const), residualHz: residual, publishedResidualHz: residual }) },
  { weight: 5, arbitrary: fc.record({ kind: fc.constantFrom('hold' as const, 'release' as const, 'withdraw' as const, 'collect' as const, 'schedule' as const) }) },
  { weight: 1, arbitrary: fc.record({ kind: fc.constantFrom('lapse' as const) }) },
  { weight: 2, arbitrary: fc.record({ kind: fc.constantFrom('wait' as const), minutes: fc.constantFrom(1, 30, 100) }) },
)
const isOpen = ({ state }: Revision) => ['drafted', 'approved', 'held'].includes(state)
const isOut = ({ state }: Revision) => ['published', 'collected'].includes(state)
const rank = { holds: 0, tight: 1, breaks: 2 }
/** What went out, byte for byte. */
const asPublished = ({ retunes, check, verdict, radioId, elementSetId, canonical, digest, signature, publishedAt, publishedBy, inputsDigest }: Revision) => ({ retunes, check, verdict, radioId, elementSetId, canonical, digest, signature, publishedAt, publishedBy, inputsDigest })

type World = Awaited<ReturnType<typeof makeWorld>>

/** Invariants of the product's description, "The life of a table", read from the rows before and after each step. */
function examine(world: World, step: Step, before: Revision[], after: Revision[]): void {
  const minutesToAos = (world.aos.getTime() - world.now.getTime()) / 60_000
  const past = (revision: Revision) => before.find(({ id }) => id === revision.id)
  expect(after.filter(isOpen).length, 'open revisions').toBeLessThanOrEqual(1)
  expect(after.filter(isOut).length, 'revisions that are out').toBeLessThanOrEqual(1)
  expect(after.map(({ number }) => number)).toEqual(after.map((_, i) => i + 1))
  for (const revision of after) {
    const was = past(revision)
    if (was?.publishedAt) expect(asPublished(revision), 'what is published never changes').toEqual(asPublished(was))
    if (was && ['superseded', 'withdrawn', 'lapsed'].includes(was.state)) expect(revision, 'what has ended stays').toEqual(was)
    const wentOut = revision.publishedAt !== null && !was?.publishedAt
    if (wentOut) {
      expect(['publish', 'schedule']).toContain(step.kind)
      expect(was?.state).toBe('approved')
      expect(minutesToAos, 'nobody publishes from AOS on').toBeGreaterThan(0)
      if (step.kind === 'schedule') expect(minutesToAos, 'the schedule keeps out of the freeze').toBeGreaterThan(freezeMinutes)
      if (revision.verdict === 'breaks') expect(new Set([revision.approvedById, revision.secondedById]).size, 'two people behind what breaks').toBe(2)
    }
    if (revision.state === 'superseded' && was?.state !== 'superseded') {
      const newer = after.find(other => other.publishedAt && !past(other)?.publishedAt)
      expect(newer?.number, 'superseded by the publication of a newer one').toBeGreaterThan(revision.number)
      expect(revision.reason).toMatch(/moves by [\d.]+ Hz/)
    }
    if (revision.state === 'withdrawn' && was?.state !== 'withdrawn') expect(step.kind).toBe('withdraw')
    if (revision.state === 'lapsed' && was?.state !== 'lapsed') expect(minutesToAos, 'lapses at AOS only').toBeLessThanOrEqual(0)
    if (revision.state === 'collected' && was?.state !== 'collected') expect([step.kind, was?.state]).toEqual(['collect', 'published'])
    if (was?.state === 'held' && revision.state !== 'held') expect(revision.state === 'lapsed' ? 'lapse' : step.kind, 'a hold stays until released').toBe(revision.state === 'lapsed' ? 'lapse' : 'release')
    if (revision.state === 'approved' && revision.approvedById === null) expect(revision.verdict === 'holds' || was?.verdict === revision.verdict || revision.number > 1, 'a rule approves what holds only').toBe(true)
  }
  if (step.kind === 'predict') examinePrediction(step, before, after, minutesToAos)
}

function examinePrediction({ residualHz, publishedResidualHz }: Step & { kind: 'predict' }, before: Revision[], after: Revision[], minutesToAos: number): void {
  const [open, out] = [before.find(isOpen), before.find(isOut)]
  const made = after.length - before.length
  if (minutesToAos <= 0) return expect(after, 'what has begun stays').toEqual(before)
  const verdict = verdictOf(residualHz)
  if (open) {
    expect(made, 'recomputed in place').toBe(0)
    const now = after.find(({ id }) => id === open.id)!
    expect(now.verdict).toBe(verdict)
    if (open.state === 'held') expect([now.state, now.reason]).toEqual(['held', open.reason])
    if (open.state === 'approved' && rank[verdict] <= rank[open.verdict]) expect([now.state, now.approvedBy], 'approval stays').toEqual(['approved', open.approvedBy])
    if (open.state === 'approved' && rank[verdict] > rank[open.verdict]) {
      expect([now.state, now.approvedBy, now.secondedBy], 'approval goes when the verdict worsens').toEqual(['drafted', null, null])
      expect(now.reason).toContain(`Its verdict went from ${open.verdict} to ${verdict}`)
    }
    return
  }
  const former = out?.check.worstResidualHz
  const hz = Math.abs(publishedResidualHz - (former ?? 0))
  const moved = out !== undefined && (verdictOf(publishedResidualHz) !== out.verdict || hz > allowanceHz / 5)
  expect(made, 'a published table is drafted anew only when its rows moved by a fifth of the allowance or changed their verdict').toBe(out && !moved ? 0 : 1)
  if (!out || !moved) return
  const newest = after.at(-1)!
  expect(newest.reason, 'and says by how many hertz').toContain(`moves by ${hz < 10 ? hz.toFixed(1) : Math.round(hz)} Hz: new elements`)
  if (rank[verdict] <= rank[out.verdict]) expect([newest.state, newest.approvedBy, newest.secondedBy]).toEqual(['approved', out.approvedBy, out.secondedBy])
  else expect([newest.state === 'approved' && verdict !== 'holds', newest.approvedById]).toEqual([false, null])
}

/** One walk through every state, so that they are all examined whatever chance brings. */
const everyState: Step[] = [
  { kind: 'schedule' }, { kind: 'collect' }, { kind: 'predict', residualHz: 300, publishedResidualHz: 900 }, { kind: 'publish', person: 'Ada' }, { kind: 'withdraw' },
  { kind: 'predict', residualHz: 500, publishedResidualHz: 500 }, { kind: 'hold' }, { kind: 'release' },
]
/** Every sequence ends when the pass has begun. */
const ending: Step[] = [{ kind: 'wait', minutes: 200 }, { kind: 'lapse' }, { kind: 'publish', person: 'Ada' }, { kind: 'predict', residualHz: 300, publishedResidualHz: 900 }]

describe('the life of a table, by the functions and the database of the product', () => {
  it('keeps the promises of its description in whatever order things happen', async () => {
    const seen = new Set<string>()
    await fc.assert(fc.asyncProperty(fc.boolean(), fc.array(step, { minLength: 8, maxLength: 22 }), async (rule, steps) => {
      const world = await makeWorld(database.db, { rule, start })
      let before = await world.revisions()
      for (const one of [...steps, ...ending]) {
        const refused = await world.take(one)
        const after = await world.revisions()
        if (refused !== null) expect(after, `refused: ${refused}`).toEqual(before)
        examine(world, one, before, after)
        for (const { state } of after) seen.add(state)
        before = after
      }
      await world.retire()
    }), { numRuns: 60, examples: [[true, everyState]] })
    expect([...seen].sort()).toEqual(['approved', 'collected', 'drafted', 'held', 'lapsed', 'published', 'superseded', 'withdrawn'])
  })
})
