import { eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { Database } from '~~/server/database/client'
import { openDatabase } from '~~/server/database/client'
import { elementSets, elementUploads, people, spacecraft } from '~~/server/database/schema'
import { systemActor } from '~~/server/domain/context'
import { loadDemo } from '~~/server/domain/demo/load-demo'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'

let place: TestDatabase
let database: Database
const start = new Date('2026-12-01T18:22:00.000Z')
const load = (now: Date) => loadDemo({ db: database.db, actor: systemActor, now }, 'only-for-the-tests-7')

beforeAll(async () => {
  place = await createTestDatabase()
  database = openDatabase(place.url)
  await load(start)
})
afterAll(async () => {
  await database.close()
  await place.drop()
})

const newest = async () => (await database.db.select({ epoch: sql<Date>`max(${elementSets.epoch})`.mapWith(elementSets.epoch) }).from(elementSets))[0]!.epoch
const inUse = () => database.db.select({ name: spacecraft.name, epoch: elementSets.epoch }).from(spacecraft).innerJoin(elementSets, eq(elementSets.id, spacecraft.inUseSetId))

it('brings people of every role, eight spacecraft and a history whose newest epoch is the hour of the start', async () => {
  expect((await database.db.select().from(people)).flatMap(person => person.roles).sort()).toEqual(['administrator', 'flight-dynamics', 'on-call', 'operator', 'reader'])
  expect(await newest()).toEqual(new Date('2026-12-01T18:00:00.000Z'))
  const used = await inUse()
  expect(used).toHaveLength(8)
  expect(used.filter(({ epoch }) => epoch.getTime() === Date.parse('2026-12-01T18:00:00.000Z'))).toHaveLength(6)
})

it('changes nothing when it is started again within the day', async () => {
  const before = await database.db.$count(elementUploads)
  await load(new Date(start.getTime() + 3 * 3_600_000))
  expect(await database.db.$count(elementUploads)).toBe(before)
})

it('brings its element sets up to date when it is started days later', async () => {
  await load(new Date('2026-12-05T09:10:00.000Z'))
  expect(await newest()).toEqual(new Date('2026-12-05T09:00:00.000Z'))
  expect((await inUse()).filter(({ epoch }) => epoch.getTime() >= Date.parse('2026-12-05T05:00:00.000Z'))).toHaveLength(8)
  expect(await database.db.$count(spacecraft)).toBe(8)
})
