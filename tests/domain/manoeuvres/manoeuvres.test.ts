import { beforeEach, describe, expect, it } from 'vitest'
import { alongTrackSigmaS } from '#shared/physics/accuracy/prior'
import { addManoeuvreBody } from '#shared/schemas/manoeuvres'
import type { PersonActor } from '~~/server/domain/context'
import { compareElementSet } from '~~/server/domain/elements/compare-element-set'
import { addManoeuvre } from '~~/server/domain/manoeuvres/add-manoeuvre'
import { cancelManoeuvre } from '~~/server/domain/manoeuvres/cancel-manoeuvre'
import { listManoeuvres } from '~~/server/domain/manoeuvres/read-manoeuvres'
import { accuracyOf } from '~~/server/domain/prediction/accuracy-of'
import { loadInputs } from '~~/server/domain/prediction/load-inputs'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'
import { setAt } from '../../support/set-history'
import type { Fleet } from '../prediction/fleet'
import { addSet, createFleet, createPerson, useSet } from '../prediction/fleet'
import { trailOf } from '../elements/support'

const test = useTestDatabase()
/** Half a day after the set of the tenth day. */
const now = new Date(setAt(10.5).epochUtcUs / 1000)
const day = (d: number) => new Date(setAt(d).epochUtcUs / 1000).toISOString()
let fleet: Fleet
let flight: PersonActor
beforeEach(async () => {
  fleet = await createFleet(test.db, { elements: setAt(10) })
  flight = await createPerson(test.db, 'Flight', ['flight-dynamics'])
  await emptyQueue(test.db)
})
const deps = () => ({ db: test.db, now, actor: flight })
const enter = (from: number, to: number, speedSigmaMps = 0.01) => addManoeuvre(deps(), fleet.spacecraftId, addManoeuvreBody.parse({ startsAt: day(from), endsAt: day(to), speedSigmaMps }))
const asked = async () => (await queuedJobs(test.db, 'predict')).filter(job => job.stationId === fleet.stationId)
const digests = async () => (await loadInputs(deps(), fleet)).served.map(({ digest }) => digest)
const sigmaKmAt = async (d: number) => {
  const { alongTrack } = (await loadInputs(deps(), fleet)).served[0]!.budget
  return alongTrackSigmaS(alongTrack)(Date.parse(day(d))) * alongTrack.speedMps / 1000
}

describe('a manoeuvre entered by hand', () => {
  it('widens the budget from its start by 2.592 km a day for a centimetre a second, until a set from after it is in use', async () => {
    // The prior, 0.5 km + 1.5 km/day: 2 km a day after the epoch (physics: prior of a low orbit). The burn: 3·Δv·t (mechanics).
    const before = await digests()
    expect(await sigmaKmAt(11)).toBeCloseTo(2, 6)
    const added = await enter(10.5, 10.6)
    expect(added).toMatchObject({ widens: true, enteredBy: 'Flight' })
    expect(await sigmaKmAt(10.4)).toBeCloseTo(1.1, 6)
    expect(await sigmaKmAt(11)).toBeCloseTo(Math.hypot(2, 2.592 / 2), 6)
    expect(await digests()).not.toEqual(before)
    await useSet(test.db, fleet.spacecraftId, await addSet(test.db, fleet.spacecraftId, setAt(10.61)))
    expect(await sigmaKmAt(11)).toBeCloseTo(0.5 + 1.5 * 0.39, 3)
    expect((await listManoeuvres(deps(), fleet.spacecraftId, { limit: 10 })).items).toMatchObject([{ id: added.id, widens: false }])
  })

  it('asks for predictions anew, leaves a trail, and counts no longer once it is cancelled', async () => {
    const before = await digests()
    const { id } = await enter(10.5, 10.6)
    expect(await asked()).toMatchObject([{ spacecraftId: fleet.spacecraftId, reason: expect.stringContaining('manoeuvre') }])
    await emptyQueue(test.db)
    expect(await cancelManoeuvre(deps(), { id })).toMatchObject({ cancelledBy: 'Flight', widens: false })
    expect(await digests()).toEqual(before)
    expect(await asked()).toHaveLength(1)
    expect((await trailOf(deps(), id)).map(row => row.action)).toEqual(['manoeuvre.add', 'manoeuvre.cancel'])
    expect(await refusalOf(cancelManoeuvre(deps(), { id }))).toMatchObject({ code: 'conflict' })
  })

  it('leaves out of learning what lies across it', async () => {
    for (const d of [6, 7, 8, 9]) await addSet(test.db, fleet.spacecraftId, setAt(d))
    // Five sets make ten pairs; two before and three after a burn make 1 + 3 (combinatorics).
    expect((await accuracyOf(deps(), fleet.spacecraftId)).pairs).toBe(10)
    await enter(7.4, 7.5)
    const { pairs, errors } = await accuracyOf(deps(), fleet.spacecraftId, { pairs: true })
    expect(pairs).toBe(4)
    expect(errors?.map(error => Math.round(error.ageDays)).sort()).toEqual([1, 1, 1, 2])
  })

  it('explains a jump of the next set that would speak of another object without it', async () => {
    // 1 s ahead is 7.6 km a day and more after the epoch; the prior explains 3·√(2² + 0.5²) km.
    const id = await addSet(test.db, fleet.spacecraftId, setAt(11, { aheadS: 1 }))
    expect((await compareElementSet(deps(), { id })).warnings.map(warning => warning.code)).toEqual(['along-track-jump', 'bstar-zero'])
    await enter(10.2, 10.3, 0.05)
    expect((await compareElementSet(deps(), { id })).warnings.map(warning => warning.code)).toEqual(['bstar-zero'])
  })

  it('is listed the latest first and page by page', async () => {
    for (const d of [3, 5, 4]) await enter(d, d + 0.1)
    const one = await listManoeuvres(deps(), fleet.spacecraftId, { limit: 2 })
    const two = await listManoeuvres(deps(), fleet.spacecraftId, { limit: 2, cursor: one.nextCursor! })
    expect([...one.items, ...two.items].map(item => item.startsAt)).toEqual([day(5), day(4), day(3)])
    expect(two.nextCursor).toBeNull()
  })

  it('does not end before it begins', () => {
    expect(addManoeuvreBody.safeParse({ startsAt: day(5), endsAt: day(4), speedSigmaMps: 0 }).error?.issues[0]).toMatchObject({ path: ['endsAt'] })
  })
})
