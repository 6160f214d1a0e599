import { and, desc, eq } from 'drizzle-orm'
import { beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { createSpacecraftBody } from '#shared/schemas/spacecraft'
import { audit, elementSets } from '~~/server/database/schema'
import { changeSpacecraft } from '~~/server/domain/catalogue/change-spacecraft'
import { createSpacecraft } from '~~/server/domain/catalogue/create-spacecraft'
import { getSpacecraft, listSpacecraft } from '~~/server/domain/catalogue/read-spacecraft'
import { retireSpacecraft } from '~~/server/domain/catalogue/retire-spacecraft'
import type { PersonActor } from '~~/server/domain/context'
import { requestRefresh } from '~~/server/domain/prediction/request-refresh'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { addActor, addElementSet, addLink, addSpacecraft, addStation } from '../../support/fixtures'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'

const test = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
let actor: PersonActor
const deps = () => ({ db: test.db, actor, now })
const create = (given: object) => createSpacecraft(deps(), createSpacecraftBody.parse(given))
const setOf = async (id: string) => (await test.db.select().from(elementSets).where(eq(elementSets.id, id)))[0]!

beforeAll(async () => {
  actor = await addActor(test.db, ['flight-dynamics'])
  await addStation(test.db)
  await addStation(test.db)
})
beforeEach(() => emptyQueue(test.db))

describe('a spacecraft made from a held element set', () => {
  it('takes name, number and designator from it, and with it every unclaimed set of the number; all stay waiting', async () => {
    const named = await addElementSet(test.db, now, { name: 'TERN 1', catalogueNumber: '90101', designator: '2026-801A' })
    const sameNumber = await addElementSet(test.db, now, { catalogueNumber: '90101' })
    const withZeros = await addElementSet(test.db, now, { catalogueNumber: '0090101' })
    const refused = await addElementSet(test.db, now, { catalogueNumber: '90101', state: 'refused' })
    const other = await addElementSet(test.db, now, { catalogueNumber: '90102' })
    const made = await create({ fromElementSetId: named.id })
    expect(made).toMatchObject({ name: 'TERN 1', catalogueNumber: '90101', designator: '2026-801A', inUseSetId: null, inUseEpoch: null, elementAgeHours: null, waitingSets: 3, linkCount: 0 })
    for (const set of [named, sameNumber, withZeros]) expect(await setOf(set.id)).toMatchObject({ spacecraftId: made.id, state: 'waiting' })
    expect(await setOf(refused.id)).toMatchObject({ spacecraftId: made.id, state: 'refused' })
    expect((await setOf(other.id)).spacecraftId).toBeNull()
  })

  it('keeps what is given over what the set says, and takes a set without a number', async () => {
    const nameless = await addElementSet(test.db, now, { designator: 'not one' })
    expect(await refusalOf(create({ fromElementSetId: nameless.id }))).toMatchObject({ code: 'not-valid', paths: ['name'] })
    expect(await create({ name: 'Sandpiper', fromElementSetId: nameless.id })).toMatchObject({ name: 'Sandpiper', catalogueNumber: null, designator: null, waitingSets: 1 })
  })

  it('refuses a set that belongs to another, has been refused, or is not there', async () => {
    const craft = await addSpacecraft(test.db, now)
    expect(await refusalOf(create({ name: 'A', fromElementSetId: craft.set.id }))).toMatchObject({ code: 'conflict' })
    const refused = await addElementSet(test.db, now, { state: 'refused' })
    expect(await refusalOf(create({ name: 'A', fromElementSetId: refused.id }))).toMatchObject({ code: 'conflict' })
    expect(await refusalOf(create({ name: 'A', fromElementSetId: actor.id }))).toMatchObject({ code: 'not-valid', paths: ['fromElementSetId'] })
  })
})

it('wants a name when no set gives one', () => {
  expect(createSpacecraftBody.safeParse({}).error?.issues.map(issue => issue.path.join('.'))).toEqual(['name'])
})

it('refuses a name or a catalogue number that another has, at its field, and frees both when that one retires', async () => {
  const first = await create({ name: 'Dunlin', catalogueNumber: '90201' })
  expect(await refusalOf(create({ name: 'dunlin' }))).toMatchObject({ code: 'conflict', paths: ['name'] })
  expect(await refusalOf(create({ name: 'Knot', catalogueNumber: '90201' }))).toMatchObject({ code: 'conflict', paths: ['catalogueNumber'] })
  const set = await addElementSet(test.db, now, { spacecraftId: first.id, catalogueNumber: '90201' })
  await retireSpacecraft(deps(), first.id)
  expect(await create({ name: 'Dunlin', catalogueNumber: '90201' })).toMatchObject({ name: 'Dunlin', waitingSets: 0 })
  expect((await setOf(set.id)).spacecraftId).toBe(first.id)
  expect((await listSpacecraft(deps(), { limit: 1000 })).items.map(item => item.id)).not.toContain(first.id)
})

it('adopts the unclaimed sets of a catalogue number that it is given later', async () => {
  const craft = await create({ name: 'Curlew' })
  const set = await addElementSet(test.db, now, { catalogueNumber: '90301' })
  expect(await changeSpacecraft(deps(), craft.id, { catalogueNumber: '90301' })).toMatchObject({ waitingSets: 1 })
  expect((await setOf(set.id)).spacecraftId).toBe(craft.id)
})

it('tells the age of the elements in use, the links in service and the sets that wait', async () => {
  const craft = await addSpacecraft(test.db, new Date('2026-11-30T06:00:00.000Z'))
  await addElementSet(test.db, now, { spacecraftId: craft.id })
  await addLink(test.db, craft.id, { retiredAt: now })
  expect(await getSpacecraft(deps(), craft.id)).toMatchObject({ inUseSetId: craft.set.id, inUseEpoch: '2026-11-30T06:00:00.000Z', elementAgeHours: 30, waitingSets: 1, linkCount: 1 })
})

it('asks for its tables anew when the error budget changes, and only then; the trail says before and after', async () => {
  const craft = await addSpacecraft(test.db, now, { oscillatorPpm: 1 })
  await changeSpacecraft(deps(), craft.id, { elementAgeLimitHours: 24 })
  expect(await queuedJobs(test.db, 'predict')).toEqual([])
  await changeSpacecraft(deps(), craft.id, { oscillatorPpm: 2 })
  expect(await queuedJobs(test.db, 'predict')).toHaveLength(2)
  const [row] = await test.db.select().from(audit).where(and(eq(audit.entityId, craft.id), eq(audit.action, 'spacecraft.change'))).orderBy(desc(audit.id)).limit(1)
  expect(row).toMatchObject({ before: { oscillatorPpm: 1 }, after: { oscillatorPpm: 2 }, actorId: actor.id })
})

it('refuses a change to a retired spacecraft and one that is not there', async () => {
  const craft = await create({ name: 'Whimbrel' })
  await retireSpacecraft(deps(), craft.id)
  expect(await refusalOf(changeSpacecraft(deps(), craft.id, { name: 'X' }))).toMatchObject({ code: 'conflict' })
  expect(await refusalOf(changeSpacecraft(deps(), actor.id, { name: 'X' }))).toMatchObject({ code: 'not-found' })
  expect(await refusalOf(getSpacecraft(deps(), actor.id))).toMatchObject({ code: 'not-found' })
})

describe('asking for predictions', () => {
  it('names each pair of a spacecraft with a set in use and a station in service once, however often it is asked', async () => {
    const withSet = await addSpacecraft(test.db, now)
    const without = await create({ name: 'Greenshank' })
    const station = await addStation(test.db)
    const gone = await addStation(test.db, { retiredAt: now })
    const ask = () => test.db.transaction(tx => requestRefresh({ db: tx }, { spacecraftIds: [withSet.id, without.id], stationIds: [station.id, gone.id], reason: 'test' }))
    expect(await ask()).toBe(1)
    await ask()
    expect(await queuedJobs(test.db, 'predict')).toEqual([{ spacecraftId: withSet.id, stationId: station.id, reason: 'test' }])
    expect(await requestRefresh(deps(), { stationIds: [], reason: 'test' })).toBe(0)
  })

  it('leaves no job behind when the change does not come about', async () => {
    const craft = await addSpacecraft(test.db, now)
    await expect(test.db.transaction(async (tx) => {
      await requestRefresh({ db: tx }, { spacecraftIds: [craft.id], reason: 'test' })
      throw new Error('undone')
    })).rejects.toThrow('undone')
    expect(await queuedJobs(test.db, 'predict')).toEqual([])
  })
})
